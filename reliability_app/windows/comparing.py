"""Compares the families of a set beside the window: all fits at once, p-values family by family."""

from __future__ import annotations

from collections.abc import Iterator

from PySide6.QtCore import QObject

from reliability_app.engine.bounds import Proceed
from reliability_app.session.analysis import SetAnalysis
from reliability_app.session.candidate_table import CandidateTable, compare_quickly, with_p_values
from reliability_app.windows.background import Worker


class FamilyComparer(Worker):
    """Tells CandidateTables, the first without p-values."""

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__("comparison", parent)

    def compare(self, analysis: SetAnalysis) -> None:
        """Fit every family to the units of an analysis, in the place of any other work."""

        def work(_proceed: Proceed) -> Iterator[CandidateTable]:
            table = compare_quickly(analysis)
            if table is not None:
                yield table

        self.start(work)

    def simulate(self, table: CandidateTable) -> None:
        """Simulate the p-values of a table, in the place of any other work."""
        self.start(lambda proceed: with_p_values(table, proceed=proceed))
