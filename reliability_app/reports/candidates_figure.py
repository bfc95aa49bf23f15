"""The picture of the Candidates page: a table of the families, drawn by the one painter."""

from __future__ import annotations

from dataclasses import dataclass

from reliability_app.engine.paper import Tick
from reliability_app.reports.axis_ticks import EVEN_ROOM, LEVEL_ROOM
from reliability_app.reports.figure import Axis, Figure, Note, Part
from reliability_app.reports.series_looks import INK, MUTED
from reliability_app.reports.shown import Shown
from reliability_app.session.candidate_table import CandidateTable

_NARROW = 0.45  # of a column: how far left of its middle a number begins


@dataclass(frozen=True)
class _Labels:
    """Ticks that are words at whole positions."""

    words: tuple[str, ...]
    falls: bool = False

    def __call__(self, _low: float, _high: float, _most: int) -> list[Tick]:
        return [Tick(float(-place if self.falls else place), word, major=True) for place, word in enumerate(self.words)]


def candidates_figure(table: CandidateTable, shown: Shown) -> Figure:
    """Return the table as a picture: families beside the rows, headings below the columns, the verdict in the foot."""
    rows = [table.cells(place) for place, one in enumerate(table.candidates) if one.is_fitted]
    headings = ("Log-likelihood", "AICc", "BIC", "A-D p", "Correlation", table.life_title)
    notes: list[Part] = [
        Note(column - _NARROW, float(-row), text or "\N{EN DASH}", INK if text else MUTED)
        for row, cells in enumerate(rows)
        for column, text in enumerate(cells[1:7])
    ]
    reasons = [f"{one.title}: {one.reason}" for one in table.candidates if not one.is_fitted]
    said = f"{table.sentence} A-D p: of Anderson-Darling, simulated; a dash: not simulated or not defined."
    return Figure(
        title=f"{table.question.name} \N{EM DASH} Candidates",
        level=Axis("", -0.5, len(headings) - 0.5, _Labels(headings), LEVEL_ROOM["linear"]),
        upright=Axis("", 0.5 - len(rows) if rows else -0.5, 0.5, _Labels(tuple(r[0] for r in rows), True), EVEN_ROOM),
        parts=tuple(notes),
        has_grid=False,
        foot=(said, *reasons, *shown.foot),
        origin=shown.origin,
    )
