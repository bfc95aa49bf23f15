"""The table of candidates as a picture: every fitted family a row, every number where its heading stands."""

from __future__ import annotations

import pytest

from reliability_app.reports.candidates_figure import candidates_figure
from reliability_app.reports.figure import Note
from reliability_app.reports.picture_file import picture_bytes
from reliability_app.reports.shown import Shown
from reliability_app.session.candidate_table import compare_quickly, with_p_values
from tests.windows.chart_pictures import PUMPS, analysis

pytestmark = pytest.mark.qt_log_ignore("This plugin does not support", extend=True)


def test_every_family_is_a_row_and_its_numbers_stand_in_their_columns(one_set: Shown) -> None:
    quick = compare_quickly(analysis(PUMPS))
    assert quick is not None
    table = next(with_p_values(quick))
    figure = candidates_figure(table, one_set)
    families = [tick.label for tick in figure.upright.ticks(0.0, 1.0, 3)]
    assert families == [one.title for one in table.candidates if one.is_fitted]
    columns = [tick.label for tick in figure.level.ticks(0.0, 1.0, 3)]
    assert columns[-1] == "B10 life"
    cells = {(round(note.x + 0.45), -round(note.y)): note.text for note in figure.parts if isinstance(note, Note)}
    assert len(cells) == len(families) * len(columns)
    assert [cells[column, 0] for column in range(6)] == list(table.cells(0)[1:7])
    assert cells[3, 1] == "\N{EN DASH}"  # not simulated yet: no number that could be taken for one
    assert figure.foot[0].startswith(table.sentence)
    assert figure.foot[1:] == tuple(one_set.statement.splitlines())
    assert "Birnbaum-Saunders" in picture_bytes(figure, ".svg").decode()
