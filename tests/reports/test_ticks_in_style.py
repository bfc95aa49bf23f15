"""The labels of an axis have their thousands set off as the user chose, in the window and in print alike."""

from reliability_app.engine.paper import AgeScale
from reliability_app.reports.axis_ticks import level_ticks
from reliability_app.session.number_style import NumberStyle, choose_number_style


def labels():
    scale = AgeScale("linear")
    ticks = level_ticks(scale.ticks, 0.0, 40_000.0, length=800.0, line=10.0, room=2.2, width_of=len)
    return [tick.label for tick in ticks if tick.major]


def test_ages_on_an_axis_follow_the_style():
    usual = labels()
    assert "20\u202f000" in usual
    try:
        choose_number_style(NumberStyle(thousands="comma"))
        assert labels() == [label.replace("\u202f", ",") for label in usual]
        choose_number_style(NumberStyle(thousands="none"))
        assert "20000" in labels()
    finally:
        choose_number_style(NumberStyle())
