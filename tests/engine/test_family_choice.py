"""A reading that depends on a choice the data cannot make is found out, and one that does not is left alone."""

from __future__ import annotations

import numpy as np
import pytest

from reliability_app.engine import Fit, LifeData, fit
from reliability_app.engine.family_choice import NOTICED_RATIO, disagreement, rivals_of
from tests.reference.published_data import nist_8413

NIST = nist_8413().life_data()


def b_life(percent: float):
    def reading(one: Fit) -> float:
        return float(one.life(percent / 100))

    return reading


def test_the_handbook_example_disagrees_on_b1_and_agrees_on_b10() -> None:
    chosen = fit(NIST, "lognormal")
    rivals = rivals_of(chosen)
    assert [rival.family.name for rival in rivals] == ["weibull"]
    found = disagreement(chosen, rivals, b_life(1))
    # B1 61.0 h against 41.9 h: a factor of 1.46. B10 158 h against 164 h: a factor of 1.04.
    assert found.title == "Weibull"
    assert found.value == fit(NIST, "weibull").life(0.01)
    assert not found.is_clear
    assert found.gain == pytest.approx(chosen.aicc - fit(NIST, "weibull").aicc)
    assert disagreement(chosen, rivals, b_life(10)) is None


def test_they_disagree_whichever_of_the_two_is_chosen() -> None:
    for name, other in (("weibull", "Lognormal"), ("lognormal", "Weibull")):
        chosen = fit(NIST, name)
        assert disagreement(chosen, rivals_of(chosen), b_life(1)).title == other


def test_a_difference_beyond_a_narrow_bound_counts_even_where_it_is_small() -> None:
    chosen = fit(NIST, "lognormal")
    own, rivals = b_life(10)(chosen), rivals_of(chosen)
    assert disagreement(chosen, rivals, b_life(10), ends=(own * 0.97, None)).title == "Weibull"
    assert disagreement(chosen, rivals, b_life(10), ends=(own * 0.94, None)) is None
    assert disagreement(chosen, rivals, b_life(10), ends=(own * 0.97, own * 1.1)) is None
    assert disagreement(chosen, rivals, b_life(10), ends=(None, np.inf)) is None


def test_a_factor_of_one_and_a_quarter_counts_under_the_widest_bound() -> None:
    chosen = fit(NIST, "lognormal")
    rivals = rivals_of(chosen)
    for factor, said in ((0.99 / NOTICED_RATIO, True), (1.01 / NOTICED_RATIO, False)):
        found = disagreement(chosen, rivals, lambda one, f=factor: 100.0 if one is chosen else 100.0 * f, ends=(1, 1e9))
        assert (found is not None) == said


def test_a_family_that_fits_clearly_worse_is_no_rival_and_one_that_fits_better_is() -> None:
    lives = np.random.default_rng(61).weibull(1.2, 400)
    data = LifeData.right_censored(lives, np.ones(400))
    weibull, lognormal = fit(data, "weibull"), fit(data, "lognormal")
    assert lognormal.aicc - weibull.aicc > 2
    assert rivals_of(weibull) == ()
    found = disagreement(lognormal, rivals_of(lognormal), b_life(1))
    assert found.is_clear
    assert found.gain == pytest.approx(lognormal.aicc - weibull.aicc)


def test_only_what_fits_as_well_as_the_best_is_a_rival() -> None:
    lives = np.random.default_rng(62).weibull(3.0, 200)
    chosen = fit(LifeData.right_censored(lives, np.ones(200)), "exponential")
    # The lognormal fits better than the exponential too, but clearly worse than the Weibull.
    assert fit(chosen.data, "lognormal").aicc < chosen.aicc
    assert [rival.family.name for rival in rivals_of(chosen)] == ["weibull"]


def test_any_chosen_family_is_held_against_the_two_usual_ones() -> None:
    chosen = fit(NIST, "exponential")
    assert {rival.family.name for rival in rivals_of(chosen)} == {"lognormal", "weibull"}
    # B1 of the exponential is 7.8 h, of the lognormal 61.0 h: the one that departs most is named.
    assert disagreement(chosen, rivals_of(chosen), b_life(1)).title == "Lognormal"


def test_without_an_estimate_or_with_too_few_units_there_are_no_rivals() -> None:
    assert rivals_of(fit(LifeData.right_censored([100, 200], [0, 0]), "weibull")) == ()
    assert rivals_of(fit(LifeData.right_censored([100, 200, 400], [1, 1, 1]), "weibull")) == ()
    assert rivals_of(fit(LifeData.right_censored([-20, 100, 150, 210, 300], np.ones(5)), "normal")) == ()
