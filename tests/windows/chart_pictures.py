"""Invented units for the tests of the charts, analysed as the program does it."""

from __future__ import annotations

from reliability_app.session.analysis import Question, SetAnalysis, analyse
from reliability_app.session.document import Ask, Basis, LifeAsk, Session, UnitSet
from reliability_app.session.picture import SetPicture
from reliability_app.session.unit_table import UnitTable

Units = list[tuple[float, str, int]]

# Invented: coolant pumps on a rig, three taken off early.
PUMPS: Units = [
    (812, "failed", 1),
    (1230, "failed", 1),
    (1410, "failed", 1),
    (1500, "running", 3),
    (1640, "failed", 2),
    (1890, "failed", 1),
    (2010, "failed", 1),
    (2150, "running", 1),
    (2400, "failed", 1),
    (2900, "failed", 1),
]
SECOND_LOT: Units = [(420, "failed", 1), (610, "failed", 1), (800, "failed", 1), (1000, "running", 6)]
NONE_FAILED: Units = [(500, "running", 4), (700, "running", 2)]


def analysis(
    units: Units,
    *,
    name: str = "Design A",
    family: str = "lognormal",
    side: str = "lower",
    bound: str = "likelihood",
    colour: int = 0,
    ask: Ask | None = None,
) -> SetAnalysis:
    rows = [
        {"unit": f"P-{row:02}", "life": str(life), "state": state, "quantity": str(quantity)}
        for row, (life, state, quantity) in enumerate(units, 1)
    ]
    basis = Basis(family=family, side=side, bound=bound)
    chosen = UnitSet(name, UnitTable.from_rows(rows), basis, colour)
    session = Session(sets=[chosen], asks=(LifeAsk(10.0) if ask is None else ask,))
    return analyse(Question.about(session, 0))


def picture(units: Units, **how: object) -> SetPicture:
    return analysis(units, **how).picture
