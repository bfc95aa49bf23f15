"""What the headings of people's tables mean: which column they name, in which unit, and what a yes would say."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass
from functools import lru_cache

from reliability_app.session.numbers import looks_numeric
from reliability_app.session.states import FAILED, RUNNING, plain_words, read_state

# Further keys, used only while columns are sorted out: the two ends of an interval in which a unit failed.
INTERVAL_START, INTERVAL_END = "interval start", "interval end"

# Words as `plain_words` gives them, the most telling first: among two headings for one column the earlier wins.
_HEADINGS: dict[str, str] = {
    "life": """
life|lives|time to failure|times to failure|ttf|age at failure|failure time|failure age|lifetime|life time
time to event|service life|operating time|operating hours|run time|runtime|running time|running hours
run hours|service time|service hours|test time|test hours|test duration|duration|age|time|t|mileage|distance
lebensdauer|laufzeit|betriebsdauer|betriebszeit|betriebsstunden|standzeit|alter|zeit|laufleistung
laufstrecke|fahrstrecke
duree de vie|duree|temps de fonctionnement|temps|age a la defaillance
vida|tiempo hasta el fallo|tiempo de funcionamiento|tiempo|edad|duracion
vita|durata|tempo al guasto|tempo di funzionamento|tempo|eta|stop|exit
""",
    "until": """
until|found failed at|found at|failed before|failed by|found failed by|bis|jusqu a|hasta|fino a
""",
    INTERVAL_START: "lower|lower bound|lower limit|from|left|time1|last seen running|last inspection|von|desde",
    INTERVAL_END: "upper|upper bound|upper limit|to|right|time2|first seen failed",
    "state": """
state|status|state f s|f s|f or s|event|result|outcome|condition|fate|censored|censoring|cens|censor|censor code
failed|failure|failure indicator|event indicator|delta|suspended|suspension|running|still running|survived
failed suspended|failed running|failure suspension|failure or suspension|dead|death
zustand|ergebnis|befund|etat|statut|resultat|estado|resultado|stato|esito
""",
    "quantity": """
quantity|qty|number of units|no of units|count|freq|frequency|weight|pieces|pcs|multiplicity|n
anzahl|menge|stuck|stueck|stuckzahl|stueckzahl|quantite|effectif|nombre|cantidad|quantita|numero di unita
""",
    "entered": """
entered|entry|entry age|age at entry|entered at|late entry|delayed entry|truncation|left truncation|start
eintritt|eintrittsalter|entree|entrada|ingresso
""",
    "unit": """
unit|unit id|unit no|unit number|id|serial|serial no|serial number|sn|s n|part|part no|part number|specimen
sample|item|name|unit name|device|test unit|no|nr|number|label|component|piece
einheit|prufling|pruefling|muster|probe|teil|bauteil|seriennummer|nummer
unite|piece no|numero|echantillon|eprouvette|unidad|pieza|muestra|probeta|unita|pezzo|campione|provino|matricola
""",
    "cause": """
cause|failure mode|mode|failure cause|cause of failure|failure mechanism|mechanism|root cause|reason
failure reason|failure type|ursache|ausfallursache|ausfallart|fehlerart|mode de defaillance|cause de defaillance
causa|modo de fallo|causa del fallo|modo di guasto|causa del guasto
""",
    "note": """
note|notes|comment|comments|remark|remarks|description|bemerkung|bemerkungen|kommentar|remarque|remarques
commentaire|nota|notas|observaciones|comentario|osservazioni|commento|annotazioni
""",
}
_UNITS: dict[str, str] = {
    "h": "h|hr|hrs|hour|hours|betriebsstunden|std|stunde|stunden|heure|heures|hora|horas|ora|ore",
    "cycles": "cycles|cycle|cyc|zyklen|zyklus|lastwechsel|schwingspiele|ciclos|cicli|load cycles",
    "km": "km|kilometer|kilometers|kilometre|kilometres|kilometros|chilometri",
    "miles": "mi|mile|miles",
    "days": "d|day|days|tage|tag|jour|jours|dia|dias|giorni",
    "weeks": "wk|wks|week|weeks|wochen|semaines|semanas|settimane",
    "months": "month|months|mo|monate|mois|meses|mesi",
    "years": "yr|yrs|year|years|jahre|ans|annees|anos|anni",
    "min": "min|mins|minute|minutes|minuten|minutos|minuti",
    "s": "s|sec|secs|second|seconds|sekunden|secondes|segundos|secondi",
    "revolutions": "rev|revs|revolution|revolutions|umdrehungen|tours|revoluciones|giri",
    "starts": "start|starts|startups|anlaufe|demarrages|arranques|avviamenti",
    "operations": "operations|actuations|switching cycles|schaltspiele|manoeuvres|maniobras|manovre",
}
_UNIT_OF = {word: unit for unit, words in _UNITS.items() for word in words.split("|")}


def _ranked_headings() -> dict[str, tuple[str, int]]:
    ranked: dict[str, tuple[str, int]] = {}
    for key, words in _HEADINGS.items():
        for rank, word in enumerate(word for word in re.split(r"[|\n]", words) if word):
            ranked.setdefault(word, (key, rank))
    return ranked


_RANKED = _ranked_headings()
_BRACKETED = re.compile(r"[(\[{]([^()\[\]{}]*)[)\]}]?")
_TO_FAILURE = re.compile(
    r"(?:\w+ )?(?:(?:to|until|till|at|before) (?:first )?(?:failure|break|breakdown|fracture)"
    r"|bis (?:zum )?(?:ausfall|bruch)|jusqu a (?:la )?(?:defaillance|rupture)"
    r"|hasta (?:el |la )?(?:fallo|falla|rotura)|fino al? (?:guasto|rottura))"
)
_NUMBER_WITH_UNIT = re.compile(r"([0-9][0-9.,']*)\s*([A-Za-z]+)\.?(\s*\+?)")
_QUESTION = re.compile(r"(?:is|has|was|did|did it|had|still)\b|\b(?:y n|yes no|indicator|flag|code|1 0|0 1)$")
_CODE = re.compile(r"\b([01]|yes|no|y|n|true|false)\s*(?:=|:|means|is)\s*(\w+)", re.IGNORECASE)


@dataclass(frozen=True)
class Heading:
    """A heading understood: the column it names, how telling it is (0 most), and the unit of a life, if it says so."""

    key: str
    rank: int
    life_unit: str | None = None


@lru_cache(maxsize=1024)
def read_heading(text: str) -> Heading | None:
    """Return what a heading means, None for one that is not known; units may stand in brackets or after "in"."""
    if len(text) > 80:
        return None
    inside = _BRACKETED.search(text)
    words = plain_words(_BRACKETED.sub(" ", text).replace("/", " "))
    unit = read_life_unit(inside[1]) if inside else None
    for phrase, unit_there in _phrases(words):
        if _TO_FAILURE.fullmatch(phrase):
            return Heading("life", 1, unit or unit_there or _UNIT_OF.get(phrase.split()[0]))
        if phrase in _RANKED:
            key, rank = _RANKED[phrase]
            return Heading(key, rank, unit or unit_there or _unit_of_phrase(phrase))
    if words in _UNIT_OF:  # "Hours" alone is a life, but any other heading for a life comes first
        return Heading("life", 100, _UNIT_OF[words])
    if question(text) is not None:
        return Heading("state", 50)
    return None


def read_life_unit(text: str) -> str | None:
    """Return the unit of age that `text` names ("hrs": "h"), in its own writing if with a factor ("10^3 km")."""
    words = plain_words(text)
    if words in _UNIT_OF:
        return _UNIT_OF[words]
    last = words.split(" ")[-1]
    factor = re.fullmatch(r"(?:[0-9^ ]+|k|thousand|million|x|10\u00b3)*", words[: -len(last)].strip())
    return " ".join(text.split()) if factor and last in _UNIT_OF and words != last else None


def bracketed_life_unit(heading: str) -> str | None:
    """Return the unit of age in the brackets of any heading, also of one that is not known ("Weg [km]")."""
    inside = _BRACKETED.search(heading) if len(heading) <= 80 else None
    return read_life_unit(inside[1]) if inside else None


def one_life_unit(cells: Iterable[str]) -> str | None:
    """Return the unit of age that all cells with text name, two of them at least ("min", "min"); else None."""
    given = [cell for cell in cells if cell]
    written = set(given)
    if len(given) < 2 or len(written) > 4:
        return None
    meant = {read_life_unit(cell) for cell in written}
    return meant.pop() if len(meant) == 1 else None


@dataclass(frozen=True)
class NumberWithUnit:
    """A cell like "812 hrs": its number, the unit as written, and the unit meant (None: not one of age)."""

    number: str
    written: str
    unit: str | None


def split_unit(text: str) -> NumberWithUnit | None:
    """Return the parts of a number with letters behind it; None for any other text."""
    match = _NUMBER_WITH_UNIT.fullmatch(text)
    if match is None or not looks_numeric(match[1]):
        return None
    return NumberWithUnit(match[1] + match[3].strip(), match[2], read_life_unit(match[2]))


def question(heading: str) -> str | None:
    """Return the state that a "yes" or "1" under this heading means; None if the heading does not tell.

    "Failed?" and "event" are answered by failed, "Censored" and "still running" by running; a heading that explains
    its code ("status (1 = running)") is believed.
    """
    for code, word in _CODE.findall(heading):
        state = read_state(word)
        if state in (FAILED, RUNNING):
            means_yes = code.casefold() in ("1", "yes", "y", "true")
            return state if means_yes else (RUNNING if state == FAILED else FAILED)
    words = plain_words(_BRACKETED.sub(" ", heading).replace("/", " "))
    words = _QUESTION.sub(" ", words).strip()
    if words in ("censoring", "censor"):
        return RUNNING
    state = read_state(words) if len(words) > 1 else None
    return state if state in (FAILED, RUNNING) else None


def _phrases(words: str) -> list[tuple[str, str | None]]:
    """Return the ways to read a heading: whole, or without a unit at its end ("life h", "life in hours")."""
    ways: list[tuple[str, str | None]] = [(words, None)]
    for size in (1, 2):
        parts = words.rsplit(" ", size)
        unit = _UNIT_OF.get(" ".join(parts[1:])) if len(parts) == size + 1 else None
        if unit:
            ways.append((parts[0].removesuffix(" in"), unit))
    return ways


def _unit_of_phrase(phrase: str) -> str | None:
    """Return the unit inside a heading of a life like "operating hours"."""
    return next((_UNIT_OF[word] for word in phrase.split() if len(word) > 2 and word in _UNIT_OF), None)
