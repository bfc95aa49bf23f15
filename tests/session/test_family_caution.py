"""What is said of the choice of family: beside the main reading, and over the candidates."""

from __future__ import annotations

import numpy as np
import pytest

from reliability_app.engine.candidates import Verdict
from reliability_app.engine.family_choice import Disagreement
from reliability_app.session.analysis import Question, SetAnalysis, analyse
from reliability_app.session.document import Basis, HazardAsk, LifeAsk, Session, UnitSet
from reliability_app.session.picture import Reading
from reliability_app.session.unit_table import UnitTable
from reliability_app.session.wording import disagreement_caution, verdict_sentence

# NIST/SEMATECH e-Handbook of Statistical Methods, sec. 8.4.1.3: ten failures, ten units running at 500 h.
NIST_FAILURES = (54, 187, 216, 240, 244, 335, 361, 373, 375, 386)
NIST_ROWS = [
    *({"life": str(life), "state": "failed"} for life in NIST_FAILURES),
    {"life": "500", "state": "running", "quantity": "10"},
]


def analysed(*asks: object, rows: list[dict[str, str]] = NIST_ROWS, **basis: object) -> SetAnalysis:
    # What is said of families is the same whatever the bound; this one is there at once.
    chosen = UnitSet("A", UnitTable.from_rows(rows), Basis(**{"bound": "likelihood", **basis}))  # type: ignore[arg-type]
    return analyse(Question.about(Session(sets=[chosen], asks=asks), 0))  # type: ignore[arg-type]


def cautions_against(analysis: SetAnalysis) -> list[list[str]]:
    return [[c.text for c in reading.cautions if c.code == "families-disagree"] for reading in analysis.readings]


def test_a_b_life_that_depends_on_the_family_is_marked_beside_the_main_reading_only() -> None:
    main, second = cautions_against(analysed(LifeAsk(1), LifeAsk(0.1)))
    assert len(main) == 1
    assert "Weibull fits these units as well and puts the B1 life at 41.9 h instead of 61.0 h" in main[0]
    assert second == []


def test_a_b_life_on_which_the_families_agree_is_left_alone() -> None:
    assert cautions_against(analysed(LifeAsk(10), LifeAsk(1))) == [[], []]


def test_dragging_the_reading_keeps_the_caution_up_to_date() -> None:
    analysis = analysed(LifeAsk(10))
    assert cautions_against(analysis.with_main_ask(LifeAsk(1)))[0] == cautions_against(analysed(LifeAsk(1)))[0] != []
    assert cautions_against(analysis.with_main_ask(LifeAsk(12)))[0] == []


def test_without_an_estimate_or_for_another_kind_of_reading_nothing_is_said() -> None:
    assert cautions_against(analysed(LifeAsk(1), rows=[{"life": "100", "state": "running"}] * 3)) == [[]]
    assert cautions_against(analysed(HazardAsk(300))) == [[]]


def test_a_family_that_fits_clearly_better_is_proposed() -> None:
    lives = np.random.default_rng(71).weibull(3.0, 200) * 1000
    rows = [{"life": f"{life:.3f}", "state": "failed"} for life in lives]
    (texts,) = cautions_against(analysed(LifeAsk(1), rows=rows, family="exponential"))
    assert "Weibull fits clearly better (AICc lower by" in texts[0]


def test_a_disagreement_needs_a_reading() -> None:
    with pytest.raises(ValueError, match="without an estimate"):
        disagreement_caution(Disagreement("Weibull", 42.0, 0.1), Reading(LifeAsk(1), None, None, None, Basis()), "h")


@pytest.mark.parametrize(
    ("verdict", "sentence"),
    [
        (
            Verdict(0.01, (("Lognormal", 61.04), ("Weibull", 41.87)), (), None, poor=False),
            "Lognormal and Weibull fit alike; B1 life is 61.0 h or 41.9 h.",
        ),
        (
            Verdict(0.1, (("Weibull", 164.0), ("Lognormal", 158.0), ("Exponential", 81.9)), (), None, poor=False),
            "Weibull, lognormal and exponential fit alike; B10 life is between 81.9 h and 164 h.",
        ),
        (
            Verdict(0.1, (("Fréchet", 164.0),), ("Weibull", "Smallest extreme value"), 5.25, poor=False),
            "Fréchet fits clearly better than Weibull and smallest extreme value (AICc lower by 5.2 or more); "
            "B10 life is 164 h.",
        ),
        (Verdict(0.1, (("Weibull", 164.0),), (), None, poor=False), "Weibull; B10 life is 164 h."),
        (
            Verdict(0.1, (("Loglogistic", 20.0), ("Inverse Gaussian", 18.0)), (), None, poor=True),
            "Loglogistic and inverse Gaussian fit alike; B10 life is 20.0 h or 18.0 h. "
            "None of the families describes these units well (Anderson-Darling).",
        ),
        (
            Verdict(0.1, (), (), None, poor=False),
            "No families can be compared on these units: more failures are needed.",
        ),
    ],
)
def test_what_is_said_over_the_candidates(verdict: Verdict, sentence: str) -> None:
    assert verdict_sentence(verdict, "h") == sentence
