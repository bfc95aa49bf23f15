"""Numbers, sentences and the basis read the same everywhere, with no more digits than they deserve."""

from __future__ import annotations

import pytest

from reliability_app.session.document import Basis, HazardAsk, LifeAsk, ReliabilityAsk
from reliability_app.session.number_style import NARROW_SPACE, NumberStyle, choose_number_style
from reliability_app.session.picture import Reading
from reliability_app.session.unit_table import Counts
from reliability_app.session.wording import (
    all_counts_text,
    as_given,
    basis_text,
    number_text,
    reading_sentence,
    share_text,
)


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (859.7, "860"),
        (1244.0, "1240"),
        (12437.0, f"12{NARROW_SPACE}400"),
        (1234567.0, f"1{NARROW_SPACE}230{NARROW_SPACE}000"),
        (9996.0, f"10{NARROW_SPACE}000"),
        (0.012345, "0.0123"),
        (99.96, "100"),
        (3.0, "3.00"),
        (1.234e-7, "1.23 × 10⁻⁷"),
        (4.5e12, "4.50 × 10¹²"),
        (0.0, "0"),
    ],
)
def test_numbers_have_three_significant_digits(value: float, text: str) -> None:
    assert number_text(value) == text


@pytest.mark.parametrize(
    ("value", "down", "up"),
    [(496.65, "496", "497"), (1164.82, "1160", "1170"), (0.0020831, "0.00208", "0.00209"), (250.0, "250", "250"),
     (0.1 + 0.2, "0.300", "0.300"), (9.999, "9.99", "10.0")],
)  # fmt: skip
def test_bounds_are_rounded_to_their_safe_side(value: float, down: str, up: str) -> None:
    assert number_text(value, toward="down") == down
    assert number_text(value, toward="up") == up


@pytest.mark.parametrize(
    ("share", "text"),
    [
        (0.5, "0.500"),
        (0.931, "0.931"),
        (0.99617, "0.9962"),
        (0.9999999, "more than 0.999999"),
        (1.0, "1"),
        (0.0004, "0.000400"),
    ],
)
def test_a_reliability_shows_what_is_missing_to_one(share: float, text: str) -> None:
    assert share_text(share) == text


@pytest.mark.parametrize(
    ("value", "text"), [(10.0, "10"), (0.1, "0.1"), (99.9, "99.9"), (15000.0, f"15{NARROW_SPACE}000")]
)
def test_what_the_user_gave_keeps_its_digits(value: float, text: str) -> None:
    assert as_given(value) == text


def reading(ask: object, estimate: float | None, lower: float | None, upper: float | None) -> Reading:
    return Reading(ask, estimate, lower, upper, Basis())  # type: ignore[arg-type]


@pytest.mark.parametrize(
    ("given", "sentence"),
    [
        (reading(LifeAsk(10), 1244, 859.7, None), "B10 life 1240 h. With 95 % confidence at least 859 h."),
        (reading(LifeAsk(10), 1244, None, 1700), "B10 life 1240 h. With 95 % confidence at most 1700 h."),
        (reading(LifeAsk(0.1), 124, 86, 170), "B0.1 life 124 h. With 95 % confidence between 86.0 h and 170 h."),
        (
            reading(ReliabilityAsk(1000), 0.931, 0.872, None),
            "Reliability at 1000 h: 0.931. With 95 % confidence at least 0.872.",
        ),
        (
            reading(HazardAsk(400), 0.00129, None, 0.00208),
            "Hazard rate at 400 h: 0.00129 per h. With 95 % confidence at most 0.00208 per h.",
        ),
        (reading(LifeAsk(10), 1244, None, None), "B10 life 1240 h. No bound can be given at 95 % confidence."),
        (reading(LifeAsk(10), None, None, None), "B10 life: no reading."),
    ],
)
def test_the_sentence_states_number_unit_and_bound(given: Reading, sentence: str) -> None:
    assert reading_sentence(given, "h") == sentence


def test_the_basis_names_family_method_units_and_bound() -> None:
    text = basis_text(
        Basis(family="weibull", bound="likelihood"), Counts(failed=12, running=7, found_failed=1, unread=3)
    )
    assert text == "Weibull, maximum likelihood, 13 failed of 20, likelihood ratio bound"


def test_the_counts_name_every_state() -> None:
    assert all_counts_text(Counts(12, 8, 0, 0)) == "12 failed, 8 running, 0 unread"
    assert all_counts_text(Counts(12, 8, 2, 1)) == "12 failed, 8 running, 2 found failed, 1 unread"


def test_numbers_follow_the_style_chosen():
    try:
        for style, texts in {
            NumberStyle(3, "space"): ("12\u202f300", "0.988"),
            NumberStyle(5, "comma"): ("12,346", "0.98765"),
            NumberStyle(4, "apostrophe"): ("12\u2019350", "0.9877"),
            NumberStyle(9, "none"): ("12346", "0.98765"),
        }.items():
            choose_number_style(style)
            assert (number_text(12345.6), share_text(0.987654)) == texts
    finally:
        choose_number_style(NumberStyle())


def test_a_lower_bound_is_rounded_down_at_any_number_of_digits():
    try:
        choose_number_style(NumberStyle(4))
        assert number_text(859.99, toward="down") == "859.9"
    finally:
        choose_number_style(NumberStyle())
