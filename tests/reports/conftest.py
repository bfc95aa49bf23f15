"""Figures of invented units, and an application to draw with."""

from __future__ import annotations

from datetime import date

import pytest
from PySide6.QtWidgets import QApplication

from reliability_app.reports.shown import Shown, shown_of
from tests.windows.chart_pictures import PUMPS, SECOND_LOT, analysis
from tests.windows.conftest import nothing_left_behind, pytest_collection_modifyitems, standing_objects_set_aside

__all__ = ["nothing_left_behind", "pytest_collection_modifyitems", "standing_objects_set_aside"]


@pytest.fixture(autouse=True)
def application(qapp: QApplication) -> QApplication:
    return qapp


@pytest.fixture(scope="session")
def one_set() -> Shown:
    return on_a_day(shown_of([analysis(PUMPS)], "h"))


@pytest.fixture(scope="session")
def two_sets() -> Shown:
    analyses = [analysis(PUMPS, side="two"), analysis(SECOND_LOT, name="Design B", colour=1, side="two")]
    return on_a_day(shown_of(analyses, "h"))


def on_a_day(shown: Shown) -> Shown:
    from dataclasses import replace

    return replace(shown, on=date(2025, 3, 14))
