"""Further readings, fit methods, held shapes and thresholds, from the session file to the sentence."""

from __future__ import annotations

import json
from math import exp, gamma, inf, log

import pytest

from reliability_app.engine import fit
from reliability_app.session.analysis import Question, SetAnalysis, analyse
from reliability_app.session.document import (
    AgeAtHazardAsk,
    Ask,
    Basis,
    ConditionalReliabilityAsk,
    HazardAsk,
    LifeAsk,
    MeanLifeAsk,
    ModeAsk,
    ReliabilityAsk,
    ResidualLifeAsk,
    Session,
    UnitSet,
)
from reliability_app.session.edits import ChangeAsks, ChangeBasis
from reliability_app.session.json_format import from_text, to_text
from reliability_app.session.picture import Reading
from reliability_app.session.plain_output import as_json
from reliability_app.session.table_contents import readings_table
from reliability_app.session.tables_out import as_tab_separated
from reliability_app.session.unit_table import Counts, UnitTable
from reliability_app.session.wording import basis_text, reading_sentence
from tests.session.test_analysis import NIST_ROWS

FURTHER = (
    ConditionalReliabilityAsk(400.0, 200.0),
    ResidualLifeAsk(200.0),
    MeanLifeAsk(),
    ModeAsk(),
    AgeAtHazardAsk(0.002),
)
RUNNING = [{"life": "1000", "state": "running", "quantity": "5"}, {"life": "1500", "state": "running", "quantity": "3"}]


def analysed(rows: list[dict[str, str]], *asks: Ask, **basis: object) -> SetAnalysis:
    chosen = Basis(**{"bound": "likelihood", "family": "weibull", **basis})
    session = Session(sets=[UnitSet("A", UnitTable.from_rows(rows), chosen)], asks=(LifeAsk(10.0), *asks))
    return analyse(Question.about(session, 0))


def test_every_reading_agrees_with_the_weibull_formulas() -> None:
    analysis = analysed(NIST_ROWS, *FURTHER)
    beta, eta = (analysis.fit.parameters[name] for name in ("shape", "scale"))
    conditional, residual, mean, mode, at_hazard = (reading.estimate for reading in analysis.readings[1:])
    assert conditional == pytest.approx(exp((200 / eta) ** beta - (400 / eta) ** beta), rel=1e-9)
    assert mean == pytest.approx(eta * gamma(1 + 1 / beta), rel=1e-9)
    assert mode == pytest.approx(eta * (1 - 1 / beta) ** (1 / beta), rel=1e-9)
    assert at_hazard == pytest.approx(eta * (0.002 * eta / beta) ** (1 / (beta - 1)), rel=1e-9)
    # The trapezoidal sum of the survival beyond 200 h, by another route than the engine's.
    steps = [200.0 + 0.5 * step for step in range(12_000)]
    survival = [exp(-((age / eta) ** beta)) for age in steps]
    assert residual == pytest.approx(0.5 * (sum(survival) - 0.5 * survival[0]) / survival[0], rel=1e-5)


def test_every_reading_is_bounded_on_the_side_of_the_lives() -> None:
    for reading in analysed(NIST_ROWS, *FURTHER).readings:
        assert reading.lower is not None, reading.ask
        assert reading.lower < reading.estimate
        assert reading.upper is None
    for reading in analysed(NIST_ROWS, *FURTHER, side="two", confidence=0.8).readings:
        assert reading.lower < reading.estimate < reading.upper, reading.ask


def test_a_mean_life_says_how_many_have_failed_by_then_and_what_it_rests_on() -> None:
    mean = analysed(NIST_ROWS, MeanLifeAsk()).readings[1]
    beta, eta = 1.720797, 606.52756  # NIST/SEMATECH e-Handbook sec. 8.4.1.3
    share = 1 - exp(-((mean.estimate / eta) ** beta))
    assert reading_sentence(mean, "h").startswith(
        f"Mean life: 541 h, by which {100 * share:.1f} % have failed. With 95"
    )
    assert "mean-rests-on-tail" in {caution.code for caution in mean.cautions}
    assert "48.8 %" in mean.cautions[0].text  # R(500) by the formula: exp(-(500/606.53)^1.7208) = 0.488


def test_a_mean_life_is_never_the_main_reading() -> None:
    session = Session(asks=(MeanLifeAsk(), ModeAsk()))
    assert session.asks == (ModeAsk(), MeanLifeAsk())
    ChangeAsks(session.asks, (MeanLifeAsk(),)).apply(session)
    assert session.asks == (LifeAsk(10.0), MeanLifeAsk())
    opened = from_text(to_text(session).replace('{"ask": "life", "percent": 10},', ""))
    assert opened.asks == (LifeAsk(10.0), MeanLifeAsk())


@pytest.mark.parametrize(
    ("reading", "sentence"),
    [
        (
            Reading(ConditionalReliabilityAsk(1000, 500), 0.9, 0.8, None, Basis()),
            "Reliability at 1000 h, given 500 h: 0.900. With 95 % confidence at least 0.800.",
        ),
        (
            Reading(MeanLifeAsk(), inf, 700.0, None, Basis()),
            "Mean life: infinite, because the upper tail of the fitted distribution is too heavy for a mean. "
            "With 95 % confidence at least 700 h.",
        ),
        (
            Reading(ResidualLifeAsk(500), inf, None, None, Basis()),
            "Mean residual life at 500 h: infinite, because the upper tail of the fitted distribution is too heavy for "
            "a mean.",
        ),
        (
            Reading(AgeAtHazardAsk(0.002), inf, 410.0, None, Basis()),
            "Age at hazard rate 0.002 per h: never, because the fitted hazard rate stays below that. "
            "With 95 % confidence at least 410 h.",
        ),
        (
            Reading(AgeAtHazardAsk(0.002), 0.0, 0.0, None, Basis()),
            "Age at hazard rate 0.002 per h: 0 h, because the fitted hazard rate starts above that. "
            "No bound above 0 h can be given at 95 % confidence.",
        ),
        (
            Reading(ModeAsk(), 0.0, None, 90.0, Basis()),
            "Mode of the lives: 0 h, because the fitted density falls from the start. "
            "With 95 % confidence at most 90.0 h.",
        ),
        (
            Reading(LifeAsk(10), None, 860.0, None, Basis(shape=2.0)),
            "No unit failed. With 95 % confidence the B10 life is at least 860 h, if the Weibull shape is 2.",
        ),
        (
            Reading(HazardAsk(500), None, None, 0.00025, Basis(family="exponential")),
            "No unit failed. With 95 % confidence the hazard rate at 500 h is at most 0.000250 per h, "
            "if the hazard rate is constant.",
        ),
    ],
)
def test_sentences_stay_true_in_every_corner(reading: Reading, sentence: str) -> None:
    assert reading_sentence(reading, "h") == sentence


def test_an_infinite_mean_is_null_for_scripts_and_a_word_in_tables() -> None:
    # Two failures far apart: sigma of the loglogistic is above 1, where no mean exists.
    rows = [{"life": life, "state": "failed"} for life in ("1", "1000", "1e6")]
    analysis = analysed(rows, MeanLifeAsk(), family="loglogistic")
    assert analysis.readings[1].estimate == inf
    (found,) = json.loads(as_json([analysis], "file", "h"))["sets"]
    assert found["readings"][1]["estimate"] is None
    assert "too heavy" in found["readings"][1]["sentence"]
    assert "\tinfinite\t" in as_tab_separated(readings_table(analysis))


def test_without_a_failure_a_held_shape_gives_bounds_and_no_estimate() -> None:
    analysis = analysed(RUNNING, ReliabilityAsk(500.0), HazardAsk(500.0), ModeAsk(), shape=2.0, bound="automatic")
    life, reliability, hazard, mode = analysis.readings
    # By hand: the scale is at least (sum of t^2 / -ln 0.05)^(1/2), the B10 life that times (-ln 0.9)^(1/2).
    scale = ((5 * 1000.0**2 + 3 * 1500.0**2) / -log(0.05)) ** 0.5
    assert (life.estimate, life.upper) == (None, None)
    assert life.lower == pytest.approx(scale * (-log(0.9)) ** 0.5, rel=1e-9)
    assert reliability.lower == pytest.approx(exp(-((500.0 / scale) ** 2)), rel=1e-9)
    assert hazard.upper == pytest.approx(2.0 * 500.0 / scale**2, rel=1e-9)
    assert mode.estimate is None
    assert analysis.main is life
    assert analysis.picture.reading is None


def test_without_a_failure_and_without_a_held_shape_the_way_to_a_bound_is_shown() -> None:
    analysis = analysed(RUNNING)
    assert analysis.main is None
    assert "bound-without-failure" in {caution.code for caution in analysis.cautions}


def test_fit_method_threshold_and_shape_of_the_basis_reach_the_engine() -> None:
    data = analysed(NIST_ROWS).fit.data
    for basis in ({"threshold": True}, {"shape": 2.0}, {"fit": "median-rank regression of age"}):
        engine = {"method" if name == "fit" else name: value for name, value in basis.items()}
        expected = fit(data, "weibull", **engine)
        assert analysed(NIST_ROWS, **basis).fit.parameters == expected.parameters != fit(data, "weibull").parameters


def test_a_method_that_does_not_go_with_the_units_is_refused_in_words() -> None:
    analysis = analysed(NIST_ROWS, fit="maximum likelihood, bias-corrected shape")
    assert analysis.fit is None
    assert "holds for complete data" in analysis.cautions[0].text


def test_a_method_without_the_bound_of_the_basis_gives_its_estimate() -> None:
    for kind in ("automatic", "calibrated", "wald"):
        analysis = analysed(NIST_ROWS, fit="median-rank regression of age", bound=kind)
        reading = analysis.readings[0]
        assert reading.estimate is not None
        assert reading.lower is None
        assert reading.cautions[0].code == "bound-unavailable"
        assert basis_text(analysis.question.basis, analysis.question.counts, reading).endswith("of 20, no bound")
        assert analysis.picture.failure is not None
        assert analysis.with_main_ask(LifeAsk(20.0)).main is not None


def test_the_basis_in_words_names_threshold_and_held_shape() -> None:
    counts = Counts(12, 8, 0, 0)
    threshold, held = Basis(family="weibull", threshold=True), Basis(family="weibull", shape=1.5)
    assert basis_text(threshold, counts).startswith("Weibull with threshold, maximum likelihood, 12 failed")
    assert basis_text(held, counts).startswith("Weibull, maximum likelihood with the shape held at 1.5, 12 failed")


def test_every_ask_and_the_whole_basis_survive_the_file() -> None:
    basis = Basis(family="weibull", fit="median-rank regression of age", threshold=True, shape=2.5)
    session = Session(sets=[UnitSet("A", basis=basis)], asks=(LifeAsk(1.0), *FURTHER))
    text = to_text(session)
    assert '{"ask": "conditional_reliability", "age": 400, "given": 200}' in text
    assert '"threshold": true, "shape": 2.5' in text
    opened = from_text(text)
    assert opened.asks == session.asks
    assert opened.sets[0].basis == basis


def test_a_basis_without_them_is_written_as_before() -> None:
    text = to_text(Session())
    assert "threshold" not in text
    assert "shape" not in text


def test_holding_a_shape_is_undone_and_named() -> None:
    session = Session()
    edit = ChangeBasis(0, Basis(), Basis(shape=2.0))
    edit.apply(session)
    assert (session.sets[0].basis.shape, edit.label) == (2.0, "change of held shape")
    edit.revert(session)
    assert session.sets[0].basis == Basis()
