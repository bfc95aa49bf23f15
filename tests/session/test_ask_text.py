"""What a user types names a reading, or is refused with a sentence; what the menu offers can be read."""

from __future__ import annotations

import pytest

from reliability_app.session.ask_text import AskUnreadable, offers, read_ask
from reliability_app.session.document import (
    AgeAtHazardAsk,
    Ask,
    ConditionalReliabilityAsk,
    HazardAsk,
    LifeAsk,
    MeanLifeAsk,
    ModeAsk,
    ReliabilityAsk,
    ResidualLifeAsk,
)
from reliability_app.session.wording import ask_title

EVERY_KIND = (
    LifeAsk(0.1),
    ReliabilityAsk(12500.0),
    HazardAsk(300.0),
    ConditionalReliabilityAsk(1000.0, 500.0),
    ResidualLifeAsk(500.0),
    MeanLifeAsk(),
    ModeAsk(),
    AgeAtHazardAsk(0.002),
)


@pytest.mark.parametrize(
    ("text", "ask"),
    [
        ("B20", LifeAsk(20)),
        ("20 %", LifeAsk(20)),
        ("1500 h", ReliabilityAsk(1500)),
        ("hazard 1500 h", HazardAsk(1500)),
        ("1500 h given 1000 h", ConditionalReliabilityAsk(1500, 1000)),
        ("R at 1500, given 1000", ConditionalReliabilityAsk(1500, 1000)),
        ("residual 1000 h", ResidualLifeAsk(1000)),
        ("Mean", MeanLifeAsk()),
        ("mode", ModeAsk()),
        ("hazard rate = 2e-5 per h", AgeAtHazardAsk(2e-5)),
        ("age at hazard 0.001/h", AgeAtHazardAsk(0.001)),
    ],
)
def test_what_is_typed_names_a_reading(text: str, ask: Ask) -> None:
    assert read_ask(text, "h") == ask


@pytest.mark.parametrize("life_unit", ["h", "km", ""])
def test_the_title_of_a_reading_asks_for_it(life_unit: str) -> None:
    for ask in EVERY_KIND:
        assert read_ask(ask_title(ask, life_unit), life_unit or "h") == ask


def test_every_kind_is_offered_and_every_offer_can_be_read() -> None:
    for age in (None, 0.037, 812.0, 3.2e7):
        found = offers("h", age)
        assert {type(read_ask(offer.text, "h")) for offer in found} == {type(ask) for ask in EVERY_KIND}
        assert all(offer.example in offer.text for offer in found)


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("1500", "may be a percent or an age"),
        ("0 %", "between 0 and 100"),
        ("residual life at -5 h", "must be positive"),
        ("500 h given 1000 h", "must not lie before the age reached"),
        ("age at hazard 0", "a hazard rate must be positive"),
        ("nonsense", "cannot be read"),
        ("", "cannot be read"),
    ],
)
def test_what_names_no_reading_is_refused_with_a_sentence(text: str, said: str) -> None:
    with pytest.raises(AskUnreadable, match=said):
        read_ask(text, "h")
