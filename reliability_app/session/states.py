"""The three states a unit can be in, and the many words people use for them."""

from __future__ import annotations

import re
import unicodedata
from functools import lru_cache

FAILED = "failed"
RUNNING = "running"
FOUND_FAILED = "found failed"
STATES: tuple[str, ...] = (FAILED, RUNNING, FOUND_FAILED)

# Words as `plain_words` gives them: small letters, no accents, no punctuation. One line or more per language.
_FAILED_WORDS = """
failed|fail|fails|failure|failures|f|dead|died|death|broken|broke|broken down|breakdown|defect|defective
faulty|event|not ok|nok|ko|cracked|fractured|ruptured|burnt out
ausgefallen|ausfall|defekt|kaputt|gebrochen|bruch|versagt|versagen|nicht in ordnung|nio|schadhaft
defaillant|defaillante|defaillance|en panne|panne|casse|cassee|rompu|rompue|hors service|hs
fallado|fallada|fallo|falla|averiado|averiada|averia|roto|rota|en fallo
guasto|guasta|rotto|rotta|fallito|fallita|avaria|in avaria
"""
_RUNNING_WORDS = """
running|run|runs|still running|r|ok|okay|in order|alive|live|survived|survivor|survives|surviving
censored|cens|c|right|right censored|r censored|suspended|suspension|suspensions|susp|s|removed|withdrawn
unfailed|not failed|no failure|non failed|no event|unbroken|intact|good|working|works|in use|pass|passed
operating|operational|in operation|still operating|in service|still in service|in test|on test|runout|run out
lauft|laeuft|lauft noch|laeuft noch|in betrieb|noch in betrieb|in ordnung|io|intakt|durchlaufer|durchlaeufer
zensiert|rechtszensiert|rechts zensiert|uberlebt|ueberlebt|nicht ausgefallen|nicht defekt|kein ausfall
en marche|en service|en fonctionnement|fonctionne|en cours|censure|censuree|suspendu|suspendue|vivant
survivant|non defaillant|pas defaillant|sans defaillance
en marcha|funcionando|funciona|en servicio|en operacion|operativo|operativa|censurado|censurada
suspendido|suspendida|vivo|no fallado|sin fallo|sin falla
funzionante|funziona|in funzione|in servizio|in marcia|censurato|censurata|sospeso|sospesa|non guasto
"""
_FOUND_FAILED_WORDS = """
found failed|found broken|found dead|found defective|failed at inspection|interval|interval censored
left censored|defekt vorgefunden|trouve defaillant|hallado averiado|trovato guasto
"""
# That a 1 in a state column means failed is common practice in published data sets; a heading may differ.
_INDICATORS = {"1": FAILED, "0": RUNNING}

_YES = frozenset(["yes", "y", "true", "t", "1", "x", "ja", "j", "wahr", "oui", "o", "vrai", "si", "verdadero", "vero"])
_NO = frozenset(re.split(r"\|", "no|n|false|0|nein|falsch|non|faux|falso"))

# No word for a state is longer, so longer texts need no normalising.
_LONGEST = 40


def _vocabulary() -> dict[str, str]:
    lists = ((FAILED, _FAILED_WORDS), (RUNNING, _RUNNING_WORDS), (FOUND_FAILED, _FOUND_FAILED_WORDS))
    words = {word: state for state, text in lists for word in re.split(r"[|\n]", text) if word}
    return words | _INDICATORS


_WORDS = _vocabulary()


@lru_cache(maxsize=4096)
def plain_words(text: str) -> str:
    """Return `text` in small letters without accents, dots and other punctuation, words one space apart."""
    bare = unicodedata.normalize("NFKD", text.casefold())
    letters = "".join(sign for sign in bare if not unicodedata.combining(sign))
    return " ".join(re.sub(r"[^\w ]|_", " ", letters.replace(".", "")).split())


def read_state(text: str) -> str | None:
    """Return "failed", "running" or "found failed" for a word understood, None for any other text.

    Besides English words, common German, French, Spanish and Italian ones are known; "1" is failed and "0" is
    running, as is common practice. "yes" and "no" are not known here: they answer a question (`read_answer`).
    """
    if text in STATES:
        return text
    return _WORDS.get(_plain_answer(text))


def read_answer(text: str, yes_means: str) -> str | None:
    """Return the state that a yes, no, 1 or 0 means when "yes" means `yes_means`; None for any other text."""
    word = _plain_answer(text)
    if word in _YES:
        return yes_means
    if word in _NO:
        return RUNNING if yes_means == FAILED else FAILED
    return None


def is_yes(text: str) -> bool:
    """Return whether `text` is a word or sign for yes ("ja", "x", "1")."""
    return _plain_answer(text) in _YES


def _plain_answer(text: str) -> str:
    if len(text) > _LONGEST:
        return ""
    # Other programs write an indicator as "1.0".
    return re.sub(r"^([01])[.,]0$", r"\1", text.strip()) if "0" in text else plain_words(text)
