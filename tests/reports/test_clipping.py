"""Lines and areas are cut at the border of the chart, neither more nor less."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as some
from hypothesis.extra.numpy import arrays

from reliability_app.reports.clipping import Box, area_inside, band_areas, line_pieces

BOX = Box(0.0, 10.0, 0.0, 10.0)


def pieces(*points: tuple[float, float]) -> list[list[tuple[float, float]]]:
    x, y = np.array(points, dtype=float).T
    return [list(zip(a.tolist(), b.tolist(), strict=True)) for a, b in line_pieces(x, y, BOX)]


def area(x: np.ndarray, y: np.ndarray) -> float:
    return 0.5 * abs(float(np.sum(x * np.roll(y, -1) - y * np.roll(x, -1))))


def test_a_line_inside_stays_as_it_is() -> None:
    assert pieces((1, 1), (5, 9), (9, 2)) == [[(1, 1), (5, 9), (9, 2)]]


def test_a_line_that_leaves_and_returns_is_in_two_pieces() -> None:
    assert pieces((5, 5), (5, 15), (7, 15), (7, 5)) == [[(5, 5), (5, 10)], [(7, 10), (7, 5)]]


def test_a_line_across_a_corner_far_outside_is_not_drawn() -> None:
    assert pieces((-5, 4), (-1, 12), (6, 30)) == []


def test_a_line_is_broken_where_a_value_does_not_exist() -> None:
    assert pieces((1, 1), (2, 2), (3, np.nan), (4, 4), (5, np.inf), (6, 6), (7, 7)) == [
        [(1, 1), (2, 2)],
        [(6, 6), (7, 7)],
    ]


def test_both_ends_outside_and_the_middle_inside() -> None:
    assert pieces((-10, 5), (20, 5)) == [[(0, 5), (10, 5)]]


def test_an_area_is_cut_to_what_lies_inside() -> None:
    # A triangle of height 20 over the base from 0 to 10: of its area 100 the lower half of the height holds 75.
    assert area(*area_inside(np.array([0.0, 10, 5]), np.array([0.0, 0, 20]), BOX)) == pytest.approx(75.0)
    assert area_inside(np.array([11.0, 12, 11]), np.array([1.0, 1, 2]), BOX)[0].size == 0


@given(arrays(float, (7, 2), elements=some.floats(-30, 30, width=32)))
def test_nothing_of_an_area_or_line_stays_outside(corners: np.ndarray) -> None:
    wide = Box(-1e-9, 10.0 + 1e-9, -1e-9, 10.0 + 1e-9)
    for x, y in (area_inside(*corners.T, BOX), *line_pieces(*corners.T, BOX)):
        assert wide.holds(x, y).all()


def test_a_band_is_in_one_area_for_each_stretch_on_which_both_edges_exist() -> None:
    x = np.arange(7.0)
    upper = np.array([2.0, 2, np.nan, 4, 4, 4, 4])
    found = [area(*corners) for corners in band_areas(x, np.ones(7), upper, BOX)]
    assert found == pytest.approx([1.0, 9.0])
