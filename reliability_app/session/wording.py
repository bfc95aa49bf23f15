"""Numbers with units, the reading sentence, the basis in words: one rule for screen, report and command line."""

from __future__ import annotations

from math import floor, isfinite, log10

from reliability_app.engine.cautions import Caution, Severity
from reliability_app.engine.families import family
from reliability_app.session.document import Ask, Basis, HazardAsk, LifeAsk, ReliabilityAsk
from reliability_app.session.picture import Reading
from reliability_app.session.unit_table import Counts

DIGITS = 3
THOUSANDS = "\u202f"  # narrow no-break space: ISO 80000-1 groups digits by threes with a small space
_GROUP_FROM = 10_000
_MOST_DECIMALS = 6
_SUPERSCRIPTS = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")

BOUND_TITLES = {
    "likelihood": "likelihood ratio",
    "wald": "Wald",
    "exact": "exact",
    "calibrated": "calibrated likelihood ratio",
    "automatic": "automatic",
}
SIDE_TITLES = {"lower": "lower bound", "upper": "upper bound", "two": "both bounds"}

STANDING_CAUTION = Caution(
    "responsible-engineer",
    Severity.NOTE,
    "A decision that can hurt people is for the responsible, qualified engineer and the local codes; "
    "these numbers do not take their place.",
)


def number_text(value: float, digits: int = DIGITS) -> str:
    """Return a number with `digits` significant digits, thousands set off by a narrow space."""
    if value == 0 or not isfinite(value):
        return "0" if value == 0 else "unbounded"
    exponent = floor(log10(abs(float(f"{value:.{digits - 1}e}"))))
    if exponent < -4 or exponent >= 9:
        mantissa, power = f"{value:.{digits - 1}e}".split("e")
        return f"{mantissa} × 10{str(int(power)).translate(_SUPERSCRIPTS)}"
    decimals = max(0, digits - 1 - exponent)
    rounded = round(value, digits - 1 - exponent)
    text = f"{rounded:,.{decimals}f}"
    return text.replace(",", THOUSANDS) if abs(rounded) >= _GROUP_FROM else text.replace(",", "")


def as_given(value: float) -> str:
    """Return a number the user gave, with the digits it was given with."""
    text = f"{value:.12g}"
    if value >= _GROUP_FROM and text.isdigit():
        return f"{int(text):,}".replace(",", THOUSANDS)
    return text


def age_text(age: float, life_unit: str) -> str:
    """Return an age with its unit."""
    return f"{number_text(age)} {life_unit}".rstrip()


def share_text(share: float) -> str:
    """Return a reliability with the decimals that show two digits of what is missing to 1, six at the most."""
    missing = 1.0 - share
    if missing < 10.0**-_MOST_DECIMALS:
        return "1" if missing <= 0 else f"more than {1 - 10.0**-_MOST_DECIMALS:.{_MOST_DECIMALS}f}"
    if share < 0.001:
        return number_text(share)
    return f"{share:.{min(max(DIGITS, 1 - floor(log10(missing))), _MOST_DECIMALS)}f}"


def ask_title(ask: Ask, life_unit: str) -> str:
    """Return what was asked, as the head of a table's row."""
    match ask:
        case LifeAsk():
            return f"B{as_given(ask.percent)} life"
        case ReliabilityAsk():
            return f"Reliability at {as_given(ask.age)} {life_unit}".rstrip()
        case HazardAsk():
            return f"Hazard rate at {as_given(ask.age)} {life_unit}".rstrip()


def value_text(ask: Ask, value: float, life_unit: str) -> str:
    """Return an answer of this kind, with its unit."""
    match ask:
        case LifeAsk():
            return age_text(value, life_unit)
        case ReliabilityAsk():
            return share_text(value)
        case HazardAsk():
            return f"{number_text(value)} per {life_unit}" if life_unit else number_text(value)


def reading_sentence(reading: Reading, life_unit: str) -> str:
    """Return the reading with its bound in plain words, or the sentence that there is none."""
    title = ask_title(reading.ask, life_unit)
    if reading.estimate is None:
        return f"{title}: no reading."
    if isinstance(reading.ask, LifeAsk):
        head = f"{title} {value_text(reading.ask, reading.estimate, life_unit)}."
    else:
        head = f"{title}: {value_text(reading.ask, reading.estimate, life_unit)}."
    return f"{head} {bound_clause(reading, life_unit)}."


def bound_clause(reading: Reading, life_unit: str) -> str:
    """Return the bound as a clause: With 95 % confidence at least 860 h."""
    confidence = f"With {as_given(100 * reading.basis.confidence)} % confidence"
    lower, upper = (
        None if end is None else value_text(reading.ask, end, life_unit) for end in (reading.lower, reading.upper)
    )
    if lower is not None and upper is not None:
        return f"{confidence} between {lower} and {upper}"
    if lower is not None:
        return f"{confidence} at least {lower}"
    if upper is not None:
        return f"{confidence} at most {upper}"
    return f"No bound can be given at {as_given(100 * reading.basis.confidence)} % confidence"


def basis_text(basis: Basis, counts: Counts, reading: Reading | None = None) -> str:
    """Return what the readings rest on: Lognormal, maximum likelihood, 12 failed of 20, likelihood ratio bound.

    With a reading the kind of bound is the one given for it, and a provisional one is called so.
    """
    title = family(basis.family).title
    used = reading.bound_used if reading is not None and reading.bound_used else basis.bound
    kind = f"{BOUND_TITLES.get(used, used)} bound"
    if used != basis.bound:
        kind += f" ({'provisional' if reading is not None and reading.is_provisional else basis.bound})"
    return f"{title}, {basis.fit}, {counts_text(counts)}, {kind}"


def counts_text(counts: Counts) -> str:
    """Return how many units failed of how many that were read."""
    failed = counts.failed + counts.found_failed
    return f"{failed} failed of {failed + counts.running}"


def all_counts_text(counts: Counts) -> str:
    """Return the full count for the foot of the grid: 12 failed, 8 running, 0 unread."""
    found = f", {counts.found_failed} found failed" if counts.found_failed else ""
    return f"{counts.failed} failed, {counts.running} running{found}, {counts.unread} unread"


def unread_caution(rows: int) -> Caution:
    """Return the caution that some rows are not part of the analysis."""
    what = "1 row is unread and left out" if rows == 1 else f"{rows} rows are unread and left out"
    return Caution("rows-unread", Severity.CAUTION, f"{what}: see the marked cells of the units for the reasons.")
