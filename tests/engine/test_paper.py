"""Probability paper: scales that come back in both tails, and round ticks at every magnification."""

from __future__ import annotations

from itertools import pairwise

import mpmath
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from reliability_app.engine.errors import UnknownName
from reliability_app.engine.families import FAMILY_NAMES, family
from reliability_app.engine.paper import AgeScale, ProbabilityScale, Tick

EPSILON = np.finfo(float).eps
SUPERSCRIPTS = str.maketrans("⁻⁰¹²³⁴⁵⁶⁷⁸⁹", "-0123456789")


def read_label(label: str) -> float:
    """Read a label as a person does: thousands apart, 2×10⁶, a typographic minus."""
    plain = label.replace("\u202f", "").replace("\u2212", "-")
    if "10" in plain and any(mark in plain for mark in "⁻⁰¹²³⁴⁵⁶⁷⁸⁹"):
        mantissa, _, power = plain.rpartition("10")
        exponent = power.translate(SUPERSCRIPTS)
        return float(f"{mantissa.rstrip('×') or '1'}e{exponent}")
    return float(plain)


def labelled(ticks: list[Tick]) -> list[Tick]:
    return [tick for tick in ticks if tick.major]


def texts(ticks: list[Tick]) -> list[str]:
    return [tick.label.replace("\u202f", " ") for tick in labelled(ticks)]


@st.composite
def ranges(draw: st.DrawFn, low: float, high: float, narrowest: float) -> tuple[float, float]:
    """Draw a range inside [low, high] whose width is spread evenly over the orders of magnitude."""
    width = 10.0 ** draw(st.floats(np.log10(narrowest), np.log10(high - low)))
    start = low + draw(st.floats(0.0, 1.0)) * (high - low - width)
    return start, start + width


class TestProbabilityScale:
    def test_lognormal_paper_is_the_normal_quantile(self) -> None:
        # Independent: mpmath's normal distribution function at 40 digits gives the fraction back.
        scale = ProbabilityScale("lognormal")
        for fraction in (1e-200, 1e-12, 0.001, 0.1, 0.5, 0.9, 0.999999):
            with mpmath.workdps(40):
                back = float(mpmath.ncdf(float(scale.to_scale(fraction))))
            assert back == pytest.approx(fraction, rel=1e-12)

    @pytest.mark.parametrize("name", ["weibull", "exponential"])
    def test_weibull_and_exponential_paper_is_log_minus_log_survival(self, name: str) -> None:
        # The definition, by mpmath at 30 digits; F = 1 - 1/e stands at 0, the characteristic life.
        scale = ProbabilityScale(name)
        assert scale.to_scale(1.0 - np.exp(-1.0)) == pytest.approx(0.0, abs=1e-15)
        for fraction in (1e-200, 1e-12, 0.001, 0.1, 0.5, 0.9, 0.999999):
            with mpmath.workdps(30):
                exact = float(mpmath.log(-mpmath.log1p(-mpmath.mpf(fraction))))
            assert scale.to_scale(fraction) == pytest.approx(exact, rel=1e-14)

    @pytest.mark.parametrize("name", FAMILY_NAMES)
    def test_z_comes_back_from_both_tails(self, name: str) -> None:
        scale, standard = ProbabilityScale(name), family(name).standard
        # Below, the fraction of a short tail leaves the double numbers.
        z = np.linspace(max(-30.0, float(standard.quantile(np.array(1e-290)))), 3.0, 400)
        # A fraction is known to half a unit in its last place; through 1/f that is what z can be known to.
        conditioning = EPSILON * scale.from_scale(z) / np.exp(standard.log_density(z).value)
        error = np.abs(scale.to_scale(scale.from_scale(z)) - z)
        assert np.all(error <= 4.0 * conditioning + 8.0 * EPSILON * np.maximum(1.0, np.abs(z)))

    @pytest.mark.parametrize("name", FAMILY_NAMES)
    def test_fractions_come_back_from_both_tails(self, name: str) -> None:
        scale = ProbabilityScale(name)
        fraction = np.concatenate([10.0 ** np.arange(-200.0, 0.0), 1.0 - 10.0 ** np.arange(-12.0, 0.0)])
        assert scale.from_scale(scale.to_scale(fraction)) == pytest.approx(fraction, rel=1e-11)

    @pytest.mark.parametrize("name", FAMILY_NAMES)
    def test_ends_and_missing_values_are_quiet(self, name: str) -> None:
        scale = ProbabilityScale(name)
        z = scale.to_scale([[0.0, 1.0], [np.nan, 0.5]])
        assert z.shape == (2, 2)
        assert z[0, 0] == -np.inf
        assert z[0, 1] == np.inf
        assert np.isnan(z[1, 0])
        assert scale.from_scale([-np.inf, np.inf]).tolist() == [0.0, 1.0]

    def test_a_percent_taken_for_a_fraction_is_refused(self) -> None:
        with pytest.raises(ValueError, match="between 0 and 1"):
            ProbabilityScale("weibull").to_scale([0.5, 10.0])

    def test_an_unknown_family_is_refused_by_name(self) -> None:
        with pytest.raises(UnknownName, match="wibull"):
            ProbabilityScale("wibull")


class TestProbabilityTicks:
    def test_the_usual_percents_appear(self) -> None:
        scale = ProbabilityScale("lognormal")
        low, high = scale.to_scale([0.01, 0.99])
        assert " ".join(texts(scale.ticks(low, high, 16))) == "1 5 10 20 30 50 70 80 90 95 99"
        scale = ProbabilityScale("weibull")
        low, high = scale.to_scale([0.001, 0.999])
        assert " ".join(texts(scale.ticks(low, high, 20))) == "0.1 0.2 0.5 1 2 5 10 20 30 50 70 90 99"

    def test_zooming_in_refines(self) -> None:
        scale = ProbabilityScale("weibull")
        low, high = scale.to_scale([0.30, 0.32])
        assert texts(scale.ticks(low, high, 6)) == ["30", "30.5", "31", "31.5", "32"]

    @pytest.mark.parametrize("name", [name for name in FAMILY_NAMES if family(name).of_log_life])
    @settings(deadline=None)  # on a busy machine an example may take long
    @given(data=st.data(), most=st.integers(3, 40))
    def test_no_range_is_empty_crowded_or_wrongly_labelled(self, name: str, data: st.DataObject, most: int) -> None:
        scale = ProbabilityScale(name)
        low, high = data.draw(ranges(*scale.limits, narrowest=1e-6))
        ticks = scale.ticks(low, high, most)
        major = labelled(ticks)
        assert len(major) <= most
        assert len(major) >= (2 if most >= 6 else 1)
        gap, slack = (high - low) / (most - 1), 1e-8 * (high - low)
        positions = [tick.position for tick in ticks]
        assert positions == sorted(positions)
        assert low - slack <= positions[0] <= positions[-1] <= high + slack
        assert all(b.position - a.position >= gap - slack for a, b in pairwise(major))
        assert len({tick.label for tick in major}) == len(major)
        for tick in major:
            percent = read_label(tick.label)
            at = scale.to_scale(percent / 100.0)
            # Near 100 % the label's own distance to 100 carries the rounding of a float.
            density = np.exp(family(name).standard.log_density(np.array([tick.position])).value[0])
            assert abs(at - tick.position) <= 1e-10 * max(1.0, abs(at)) + 4.0 * EPSILON / density
        assert all(tick.label == "" for tick in ticks if not tick.major)

    def test_labels_stand_still_while_panning(self) -> None:
        scale = ProbabilityScale("lognormal")
        for shift in np.linspace(0.0, 1.0, 23):
            ticks = scale.ticks(-3.0 + shift, 3.0 + shift, 14)
            inside = [tick.label for tick in labelled(ticks) if -2.0 < tick.position < 3.0]
            assert inside == ["10", "30", "50", "70", "90", "99"]

    @pytest.mark.parametrize(("low", "high"), [(1.0, 1.0), (2.0, 1.0), (np.nan, 1.0), (0.0, np.inf)])
    def test_an_impossible_range_is_refused(self, low: float, high: float) -> None:
        with pytest.raises(ValueError, match="finite range"):
            ProbabilityScale("weibull").ticks(low, high)


class TestAgeScale:
    @pytest.mark.parametrize("kind", ["log", "linear"])
    def test_ages_come_back(self, kind: str) -> None:
        scale = AgeScale(kind)
        ages = np.geomspace(1e-6, 1e12, 60).reshape(3, 20)
        assert scale.from_scale(scale.to_scale(ages)) == pytest.approx(ages, rel=1e-14)

    def test_the_log_scale_is_the_natural_logarithm_and_quiet_at_zero(self) -> None:
        positions = AgeScale("log").to_scale([0.0, 1.0, np.e, -1.0])
        assert positions[0] == -np.inf
        assert positions[1:3].tolist() == [0.0, 1.0]
        assert np.isnan(positions[3])

    def test_an_unknown_kind_is_refused(self) -> None:
        with pytest.raises(ValueError, match="'log' or 'linear'"):
            AgeScale("root")


class TestAgeTicks:
    @pytest.mark.parametrize(
        ("low", "high", "most", "expected"),
        [
            (100, 5000, 10, ["100", "200", "500", "1000", "2000", "5000"]),
            (800, 3000, 10, ["800", "1000", "1200", "1500", "2000", "2500", "3000"]),
            (1, 1e12, 12, ["1", "10²", "10⁴", "10⁶", "10⁸", "10¹⁰", "10¹²"]),
            (5e5, 2e7, 8, ["5×10⁵", "10⁶", "2×10⁶", "5×10⁶", "10⁷", "2×10⁷"]),
            (1.23, 1.24, 10, ["1.23", "1.232", "1.234", "1.236", "1.238", "1.24"]),
        ],
    )
    def test_log_labels(self, low: float, high: float, most: int, expected: list[str]) -> None:
        scale = AgeScale("log")
        assert texts(scale.ticks(*scale.to_scale([low, high]), most)) == expected

    @pytest.mark.parametrize(
        ("low", "high", "most", "expected"),
        [
            (0, 5000, 10, ["0", "1000", "2000", "3000", "4000", "5000"]),
            (-1, 1.2, 8, ["−1.0", "−0.5", "0", "0.5", "1.0"]),
            (0, 3e7, 5, ["0", "10⁷", "2×10⁷", "3×10⁷"]),
            (
                1234567,
                1234569,
                6,
                ["1 234 567.0", "1 234 567.5", "1 234 568.0", "1 234 568.5", "1 234 569.0"],
            ),
        ],
    )
    def test_linear_labels(self, low: float, high: float, most: int, expected: list[str]) -> None:
        assert texts(AgeScale("linear").ticks(low, high, most)) == expected

    def test_a_decade_is_marked_from_two_to_nine(self) -> None:
        ticks = AgeScale("log").ticks(np.log(1.0), np.log(1e4), 5)
        minor = [round(float(np.exp(tick.position)), 9) for tick in ticks if not tick.major]
        assert minor[:8] == [2.0, 5.0, 20.0, 50.0, 200.0, 500.0, 2000.0, 5000.0]
        assert texts(ticks) == ["1", "10", "100", "1000", "10 000"]

    @pytest.mark.parametrize("kind", ["log", "linear"])
    @settings(deadline=None)  # on a busy machine an example may take long
    @given(data=st.data(), most=st.integers(3, 40))
    def test_no_range_is_empty_crowded_or_wrongly_labelled(self, kind: str, data: st.DataObject, most: int) -> None:
        scale = AgeScale(kind)
        edges = (np.log(1e-6), np.log(1e12)) if kind == "log" else (0.0, 1e7)
        low, high = data.draw(ranges(*edges, narrowest=1e-6 * (edges[1] - edges[0])))
        ticks = scale.ticks(low, high, most)
        major = labelled(ticks)
        assert len(major) <= most
        assert len(major) >= (2 if most >= 6 else 1)
        gap, slack = (high - low) / (most - 1), 1e-8 * (high - low)
        positions = [tick.position for tick in ticks]
        assert positions == sorted(positions)
        assert low - slack <= positions[0] <= positions[-1] <= high + slack
        assert all(b.position - a.position >= gap - slack for a, b in pairwise(major))
        assert len({tick.label for tick in major}) == len(major)
        for tick in major:
            assert scale.to_scale(read_label(tick.label)) == pytest.approx(tick.position, rel=1e-12, abs=1e-12)
