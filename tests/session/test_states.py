"""Words for states; the sets of words are our own choice, the indicator 1/0 is common practice."""

from __future__ import annotations

import pytest

from reliability_app.session.states import FAILED, FOUND_FAILED, RUNNING, STATES, is_yes, read_answer, read_state


@pytest.mark.parametrize(
    ("typed", "state"),
    [
        ("failed", FAILED),
        ("Failed", FAILED),
        (" FAILURE ", FAILED),
        ("F", FAILED),
        ("broken-down", FAILED),
        ("Not OK", FAILED),
        ("1", FAILED),
        ("1.0", FAILED),
        ("ausgefallen", FAILED),
        ("n.i.O.", FAILED),
        ("défaillante", FAILED),
        ("falló", FAILED),
        ("Guasto", FAILED),
        ("ok", RUNNING),
        ("O.K.", RUNNING),
        ("S", RUNNING),
        ("right-censored", RUNNING),
        ("still running", RUNNING),
        ("0", RUNNING),
        ("läuft", RUNNING),
        ("laeuft noch", RUNNING),
        ("i.O.", RUNNING),
        ("En marche", RUNNING),
        ("en_servicio", RUNNING),
        ("censuré", RUNNING),
        ("funzionante", RUNNING),
        ("found failed", FOUND_FAILED),
        ("Found broken", FOUND_FAILED),
        ("interval", FOUND_FAILED),
    ],
)
def test_common_words_are_understood(typed: str, state: str | None) -> None:
    assert read_state(typed) == state


@pytest.mark.parametrize("typed", ["", "yes", "no", "true", "2", "unknown", "n/a", "812", "failed?x", "10", "x" * 1000])
def test_other_texts_are_not_guessed_at(typed: str) -> None:
    assert read_state(typed) is None


def test_own_words_mean_themselves() -> None:
    assert [read_state(state) for state in STATES] == list(STATES)


@pytest.mark.parametrize(
    ("typed", "when_yes_is_failed", "when_yes_is_running"),
    [
        ("yes", FAILED, RUNNING),
        ("No", RUNNING, FAILED),
        ("1", FAILED, RUNNING),
        ("0.0", RUNNING, FAILED),
        ("TRUE", FAILED, RUNNING),
        ("ja", FAILED, RUNNING),
        ("sí", FAILED, RUNNING),
        ("Faux", RUNNING, FAILED),
        ("x", FAILED, RUNNING),
        ("maybe", None, None),
        ("", None, None),
    ],
)
def test_yes_means_what_the_question_says(typed: str, when_yes_is_failed: str, when_yes_is_running: str) -> None:
    assert read_answer(typed, FAILED) == when_yes_is_failed
    assert read_answer(typed, RUNNING) == when_yes_is_running
    assert is_yes(typed) == (when_yes_is_failed == FAILED)
