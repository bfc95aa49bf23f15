"""The parts of the charts on their own: percents a reading stops at, bands, ranges, themes."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from PySide6.QtCore import QPointF
from PySide6.QtGui import QPalette
from PySide6.QtWidgets import QApplication

from reliability_app.engine.curves import Curve
from reliability_app.engine.paper import AgeScale, ProbabilityScale
from reliability_app.reports.chart_ranges import curve_range, hazard_top, paper_range
from reliability_app.reports.reading_places import age_at, fraction_at, paper_mark, place_of
from reliability_app.reports.series_looks import ink_on
from reliability_app.windows.charts.reading_steps import fine_step, round_step, snapped
from reliability_app.windows.charts.set_items import band_path
from reliability_app.windows.theme import apply_scheme, dark, dark_palette, light, theme_of
from tests.windows.chart_pictures import NONE_FAILED, PUMPS, picture


class TestPercents:
    @pytest.mark.parametrize(
        ("percent", "per_pixel", "expected"),
        [
            (12.34, 0.25, 12.0),
            (52.6, 0.6, 53.0),
            (5.234, 0.12, 5.2),
            (1.234, 0.04, 1.2),
            (0.12345, 0.005, 0.12),
            (99.8765, 0.004, 99.88),
            (12.3456, 0.0004, 12.346),  # zoomed in
        ],
    )
    def test_the_mouse_stops_at_short_percents(self, percent, per_pixel, expected):
        assert snapped(percent, per_pixel) == expected

    @given(st.floats(1e-6, 100.0 - 1e-6), st.floats(1e-9, 10.0))
    def test_a_stop_is_near_and_never_0_or_100(self, percent, per_pixel):
        stop = snapped(percent, per_pixel)
        assert 0.0 < stop < 100.0
        distance = min(percent, 100.0 - percent)
        assert abs(stop - percent) <= min(5.0 * per_pixel, 0.1 * distance) * (1 + 1e-6) + 1e-9

    def test_keys_walk_the_usual_percents_up_and_down(self):
        up = [0.1]
        while up[-1] < 99.9:
            up.append(round_step(up[-1], +1))
        assert up == [0.1, 0.2, 0.5, 1, 2, 5, 10, 20, 30, 40, 50, 60, 70, 80, 90, 95, 98, 99, 99.5, 99.8, 99.9]
        down = [99.9]
        while down[-1] > 0.1:
            down.append(round_step(down[-1], -1))
        assert down == up[::-1]

    @pytest.mark.parametrize(
        ("percent", "direction", "expected"),
        [
            (10, 1, 11),
            (10, -1, 9.9),
            (9.9, 1, 10),
            (1, -1, 0.99),
            (50, 1, 51),
            (90, 1, 90.1),
            (99, -1, 98.9),
            (5.5, 1, 5.6),
        ],
    )
    def test_a_small_step_is_one_of_the_second_figure(self, percent, direction, expected):
        assert fine_step(percent, direction) == pytest.approx(expected, abs=1e-12)

    @given(st.floats(1e-4, 99.9999), st.sampled_from([-1, 1]))
    def test_a_small_step_always_moves_on(self, percent, direction):
        moved = fine_step(percent, direction)
        assert (moved - percent) * direction > 0.0
        assert 0.0 < moved < 100.0


class TestBand:
    def test_a_band_breaks_where_a_bound_does_not_exist(self):
        x = np.arange(8.0)
        upper = np.array([1.0, 1, 1, np.nan, np.nan, 1, 1, 1])
        path = band_path(x, np.zeros(8), upper)
        assert path.contains(QPointF(1.5, 0.5))
        assert not path.contains(QPointF(3.5, 0.5))
        assert path.contains(QPointF(6.0, 0.5))

    def test_a_band_without_a_bound_is_nothing(self):
        assert band_path(np.arange(3.0), np.zeros(3), np.full(3, np.nan)).isEmpty()


class TestAlongTheFit:
    @pytest.mark.parametrize("family", ["lognormal", "weibull", "exponential"])
    def test_percent_and_age_come_back_also_beyond_the_drawn_ends(self, family):
        one = picture(PUMPS, family=family)
        for fraction in (1e-7, 1e-3, 0.1, 0.5, 0.999):
            assert fraction_at(one, age_at(one, fraction)) == pytest.approx(fraction, rel=1e-7)

    def test_a_picture_without_a_fit_says_so(self):
        with pytest.raises(ValueError, match="without a fit"):
            age_at(picture(NONE_FAILED), 0.1)


class TestRanges:
    def test_a_bound_far_away_does_not_squeeze_the_units(self):
        one = picture(PUMPS)
        far = replace(one, reading=replace(one.reading, lower=1e-9))
        scale, probability = AgeScale("log"), ProbabilityScale("lognormal")
        mark = paper_mark(place_of(far, "h"), probability, scale, "h")
        shown = paper_range([far], mark, probability, scale)
        units = np.log(one.point_age.max()) - np.log(one.point_age.min())
        assert shown.right - shown.left < 4.0 * units

    def test_one_unit_alone_has_a_range(self):
        one = picture([(500, "failed", 1)])
        for kind in ("log", "linear"):
            scale = AgeScale(kind)
            shown = paper_range([one], None, ProbabilityScale("lognormal"), scale)
            assert shown.left < float(scale.to_scale(500.0)) < shown.right
            assert curve_range([one], None, scale, high=100.0).right > float(scale.to_scale(500.0))

    def test_a_hazard_that_starts_at_infinity_leaves_the_rest_readable(self):
        age = np.geomspace(1e-6, 1000.0, 160)
        pole = Curve(age, 0.02 * age**-0.7)
        one = replace(picture(PUMPS), hazard=pole)
        top = hazard_top([one], None, (1e-6, 1000.0))
        assert top <= 5.0 * float(np.median(pole.y))

    def test_no_hazard_has_a_top_all_the_same(self):
        assert hazard_top([picture(NONE_FAILED)], None, (0.0, 700.0)) == 1.0


class TestTheme:
    @pytest.fixture
    def app(self, qapp):
        yield qapp
        apply_scheme(qapp, "system")

    def test_light_and_dark_differ_and_are_told_from_a_palette(self):
        assert not light().is_dark
        assert dark().is_dark
        assert theme_of(dark_palette()) == dark()

    def test_text_and_lines_are_readable_on_their_ground(self):
        # Contrast ratios of WCAG 2.1, from memory: 4.5 for text (1.4.3), 3 for graphical objects (1.4.11).
        for theme in (light(), dark()):
            assert contrast(theme.foreground, theme.background) >= 7.0
            assert contrast(theme.muted, theme.background) >= 3.0
            for style in theme.series[:2]:
                assert contrast(style.colour, theme.background) >= 3.0
            for style in theme.series:
                assert contrast(ink_on(style.colour), style.colour) >= 4.5

    def test_a_scheme_is_put_on_and_taken_off(self, app: QApplication):
        before = app.palette().color(QPalette.ColorRole.Base).name()
        apply_scheme(app, "dark")
        assert app.palette().color(QPalette.ColorRole.Base).name() == dark().background
        apply_scheme(app, "light")
        assert app.palette().color(QPalette.ColorRole.Base).name() == light().background
        apply_scheme(app, "system")
        assert app.palette().color(QPalette.ColorRole.Base).name() == before


def contrast(one: str, other: str) -> float:
    low, high = sorted(luminance(colour) for colour in (one, other))
    return (high + 0.05) / (low + 0.05)


def luminance(colour: str) -> float:
    """Relative luminance as WCAG 2.1 defines it (from memory)."""
    parts = [int(colour[at : at + 2], 16) / 255.0 for at in (1, 3, 5)]
    red, green, blue = (part / 12.92 if part <= 0.04045 else ((part + 0.055) / 1.055) ** 2.4 for part in parts)
    return 0.2126 * red + 0.7152 * green + 0.0722 * blue
