"""Numbers with units, the reading sentence, the basis in words: one rule for screen, report and command line."""

from __future__ import annotations

from collections.abc import Sequence
from decimal import ROUND_CEILING, ROUND_FLOOR, ROUND_HALF_EVEN, Decimal
from math import floor, isfinite, log10
from typing import Literal

from reliability_app.engine import Fit
from reliability_app.engine.candidates import Verdict
from reliability_app.engine.cautions import Caution, Severity
from reliability_app.engine.families import family
from reliability_app.engine.family_choice import Disagreement
from reliability_app.session.document import (
    AgeAtHazardAsk,
    Ask,
    Basis,
    ConditionalReliabilityAsk,
    HazardAsk,
    LifeAsk,
    MeanLifeAsk,
    ModeAsk,
    ReliabilityAsk,
    ResidualLifeAsk,
)
from reliability_app.session.number_style import NARROW_SPACE, in_style, number_style
from reliability_app.session.picture import Reading
from reliability_app.session.unit_table import Counts

Toward = Literal["nearest", "down", "up"]

# Where a lower and an upper bound are rounded to.
SAFE_SIDES: tuple[Toward, Toward] = ("down", "up")
_ROUNDINGS = {"nearest": ROUND_HALF_EVEN, "down": ROUND_FLOOR, "up": ROUND_CEILING}
_BINARY_NOISE = Decimal("1e-12")
_GROUP_FROM = 10_000
_MOST_DECIMALS = 6
_NAMES_SHOWN = 3
_SUPERSCRIPTS = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")

_PERSONS = ("Weibull", "Fréchet", "Birnbaum")

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

BOUND_WITHOUT_FAILURE = Caution(
    "bound-without-failure",
    Severity.NOTE,
    "A lower bound of the lives can be given before any unit fails: choose the Weibull family and hold its shape at a "
    "value that is known from elsewhere, or the exponential family where a constant hazard can be justified.",
)


def number_text(value: float, digits: int | None = None, *, toward: Toward = "nearest") -> str:
    """Return a number with `digits` significant digits, in the style chosen: as many as it says, unless they are given.

    A bound is rounded to its safe side: a lower one `toward` "down", an upper one "up".
    """
    if value == 0 or not isfinite(value):
        return "0" if value == 0 else "unbounded"
    digits = digits or number_style().digits
    exact = Decimal(repr(float(value)))
    rounded = _rounded(exact, digits, toward)
    exponent = rounded.adjusted()
    if exponent < -4 or exponent >= 9:
        mantissa, power = f"{rounded:.{digits - 1}e}".split("e")
        return f"{mantissa} × 10{str(int(power)).translate(_SUPERSCRIPTS)}"
    text = f"{rounded:,.{max(0, digits - 1 - exponent)}f}"
    return text.replace(",", number_style().mark if abs(rounded) >= _GROUP_FROM else "")


def _rounded(value: Decimal, digits: int, toward: Toward) -> Decimal:
    """Round to significant digits; what rounds up to a further digit keeps it."""
    step = Decimal(1).scaleb(value.adjusted() - digits + 1)
    # A hair on the unsafe side is the noise of a last binary digit, not a value.
    if abs(value - value.quantize(step, ROUND_HALF_EVEN)) <= abs(value) * _BINARY_NOISE:
        toward = "nearest"
    return value.quantize(step, _ROUNDINGS[toward])


def as_given(value: float) -> str:
    """Return a number the user gave, with the digits it was given with."""
    text = f"{value:.12g}"
    if value >= _GROUP_FROM and text.isdigit():
        return in_style(f"{int(text):,}".replace(",", NARROW_SPACE))
    return text


def age_text(age: float, life_unit: str, *, toward: Toward = "nearest") -> str:
    """Return an age with its unit."""
    return f"{number_text(age, toward=toward)} {life_unit}".rstrip()


def observed_age_text(age: float, life_unit: str) -> str:
    """Return an age that was observed, with the digits it was recorded with."""
    return f"{as_given(age)} {life_unit}".rstrip()


def share_text(share: float, *, toward: Toward = "nearest") -> str:
    """Return a reliability with the decimals that show two digits of what is missing to 1, six at the most."""
    missing = 1.0 - share
    if missing < 10.0**-_MOST_DECIMALS:
        return "1" if missing <= 0 else f"more than {1 - 10.0**-_MOST_DECIMALS:.{_MOST_DECIMALS}f}"
    if share < 0.001:
        return number_text(share, toward=toward)
    places = min(max(number_style().digits, 1 - floor(log10(missing))), _MOST_DECIMALS)
    return f"{Decimal(repr(share)).quantize(Decimal(1).scaleb(-places), _ROUNDINGS[toward]):f}"


def ask_title(ask: Ask, life_unit: str) -> str:
    """Return what was asked, as the head of a table's row."""
    match ask:
        case LifeAsk():
            return f"B{as_given(ask.percent)} life"
        case ReliabilityAsk():
            return f"Reliability at {observed_age_text(ask.age, life_unit)}"
        case HazardAsk():
            return f"Hazard rate at {observed_age_text(ask.age, life_unit)}"
        case ConditionalReliabilityAsk():
            ages = (observed_age_text(age, life_unit) for age in (ask.age, ask.given))
            return "Reliability at {}, given {}".format(*ages)
        case ResidualLifeAsk():
            return f"Mean residual life at {observed_age_text(ask.age, life_unit)}"
        case MeanLifeAsk():
            return "Mean life"
        case ModeAsk():
            return "Mode of the lives"
        case AgeAtHazardAsk():
            return f"Age at hazard rate {_rate_text(as_given(ask.hazard), life_unit)}"


def value_text(ask: Ask, value: float, life_unit: str, *, toward: Toward = "nearest") -> str:
    """Return an answer of this kind, with its unit."""
    match ask:
        case ReliabilityAsk() | ConditionalReliabilityAsk():
            return share_text(value, toward=toward)
        case HazardAsk():
            return _rate_text(number_text(value, toward=toward), life_unit)
        case AgeAtHazardAsk() if not isfinite(value):
            return "never"
        case _ if not isfinite(value):
            return "infinite"
        case _:
            return age_text(value, life_unit, toward=toward)


def is_age(ask: Ask) -> bool:
    """True where the answer is an age or a length of life."""
    return not isinstance(ask, ReliabilityAsk | ConditionalReliabilityAsk | HazardAsk)


def _rate_text(number: str, life_unit: str) -> str:
    return f"{number} per {life_unit}" if life_unit else number


def reading_sentence(reading: Reading, life_unit: str) -> str:
    """Return the reading with its bound in plain words, or the sentence that there is none."""
    title = ask_title(reading.ask, life_unit)
    if reading.estimate is None:
        return _bound_alone(reading, title, life_unit) if reading.is_given else f"{title}: no reading."
    colon = "" if isinstance(reading.ask, LifeAsk) else ":"
    head = f"{title}{colon} {value_text(reading.ask, reading.estimate, life_unit)}{_added(reading)}."
    if not isfinite(reading.estimate) and (reading.lower, reading.upper) == (None, None):
        return head
    return f"{head} {bound_clause(reading, life_unit)}."


def _bound_alone(reading: Reading, title: str, life_unit: str) -> str:
    """Return the bound that survival without a failure gives: there is no estimate beside it."""
    confidence = f"With {as_given(100 * reading.basis.confidence)} % confidence"
    subject = title if isinstance(reading.ask, LifeAsk) else title[0].lower() + title[1:]
    shape = reading.basis.shape
    held = "the hazard rate is constant" if shape is None else f"the Weibull shape is {as_given(shape)}"
    return f"No unit failed. {confidence} the {subject} is {_ends_text(reading, life_unit)}, if {held}."


def _added(reading: Reading) -> str:
    """Return what must be said with an estimate that would mislead alone."""
    match reading.ask, reading.estimate:
        case ((MeanLifeAsk() | ResidualLifeAsk()), float(value)) if not isfinite(value):
            return ", because the upper tail of the fitted distribution is too heavy for a mean"
        case MeanLifeAsk(), _ if reading.share_failed is not None:
            return f", by which {number_text(100.0 * reading.share_failed)} % have failed"
        case ModeAsk(), 0.0:
            return ", because the fitted density falls from the start"
        case AgeAtHazardAsk(), 0.0:
            return ", because the fitted hazard rate starts above that"
        case AgeAtHazardAsk(), float(value) if not isfinite(value):
            return ", because the fitted hazard rate stays below that"
    return ""


def bound_clause(reading: Reading, life_unit: str) -> str:
    """Return the bound as a clause: With 95 % confidence at least 860 h."""
    confidence = f"{as_given(100 * reading.basis.confidence)} % confidence"
    if reading.lower == 0 and reading.upper is None and is_age(reading.ask):
        return f"No bound above {age_text(0.0, life_unit)} can be given at {confidence}"
    said = _ends_text(reading, life_unit)
    return f"With {confidence} {said}" if said else f"No bound can be given at {confidence}"


def _ends_text(reading: Reading, life_unit: str) -> str:
    """Return the ends of a bound: at least 860 h; empty without any."""
    lower = None if reading.lower is None else value_text(reading.ask, reading.lower, life_unit, toward="down")
    upper = None if reading.upper is None else value_text(reading.ask, reading.upper, life_unit, toward="up")
    if lower is not None and upper is not None:
        return f"between {lower} and {upper}"
    if lower is not None:
        return f"at least {lower}"
    return f"at most {upper}" if upper is not None else ""


def basis_text(basis: Basis, counts: Counts, reading: Reading | None = None) -> str:
    """Return what the readings rest on: Lognormal, maximum likelihood, 12 failed of 20, likelihood ratio bound.

    With a reading the kind of bound is the one given for it, and a provisional one is called so.
    """
    title = family(basis.family).title + (" with threshold" if basis.threshold else "")
    method = basis.fit if basis.shape is None else f"{basis.fit} with the shape held at {as_given(basis.shape)}"
    return f"{title}, {method}, {counts_text(counts)}, {_kind_text(basis, reading)}"


def _kind_text(basis: Basis, reading: Reading | None) -> str:
    """Return the kind of bound in words: that of the reading where there is one."""
    if reading is not None and (reading.bound_used, reading.lower, reading.upper) == ("", None, None):
        return "no bound"
    used = reading.bound_used if reading is not None and reading.bound_used else basis.bound
    kind = f"{BOUND_TITLES.get(used, used)} bound"
    if used == basis.bound:
        return kind
    return f"{kind} ({'provisional' if reading is not None and reading.is_provisional else basis.bound})"


def parameters_text(fitted: Fit | None) -> str:
    """Return the fitted parameters and the log-likelihood in words; empty without a fit."""
    if fitted is None or not fitted.converged:
        return ""
    parameters = ", ".join(
        f"{name.replace('_', ' ')} {number_text(value, number_style().digits + 1)}"
        for name, value in fitted.parameters.items()
        if value is not None
    )
    return f"{parameters}; log-likelihood {fitted.log_likelihood:.3f}"


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
    what = "1 row cannot be read and is left out" if rows == 1 else f"{rows} rows cannot be read and are left out"
    return Caution("rows-unread", Severity.CAUTION, f"{what}: the marked cells of the table of units say why.")


def undrawn_caution(units: int) -> Caution:
    """Return the caution that failures came after the estimate without a family had fallen to 0."""
    what = "1 failed unit has" if units == 1 else f"{units} failed units have"
    why = "all units watched at some earlier age had failed, so that the estimate without a family is 0 from there"
    return Caution("points-not-drawn", Severity.CAUTION, f"{what} no mark on the paper: {why}; the fit counts them.")


def tail_caution(title: str, running: float, last: str) -> Caution:
    """Return the caution that a mean rests on lives which nobody has observed."""
    rests = (
        f"{number_text(100.0 * running)} % of the units it is the mean of run on beyond the last observation ({last}), "
        "and their lives come from the family chosen alone; a B-life rests on what was observed."
    )
    return Caution("mean-rests-on-tail", Severity.CAUTION, f"{title}: {rests}", title)


def verdict_sentence(verdict: Verdict, life_unit: str) -> str:
    """Return what can be said of the choice of family: Lognormal and Weibull fit alike; B1 life is 61.0 h or 41.9 h."""
    if not verdict.alike:
        return "No families can be compared on these units: more failures are needed."
    titles, lives = zip(*verdict.alike, strict=True)
    life = ask_title(LifeAsk(100.0 * verdict.fraction), life_unit)
    if len(titles) > 1:
        ages = [age_text(age, life_unit) for age in (lives if len(lives) == 2 else (min(lives), max(lives)))]
        between = f"{ages[0]} or {ages[1]}" if len(lives) == 2 else f"between {ages[0]} and {ages[1]}"
        said = f"{_opening(_listed(titles))} fit alike; {life} is {between}."
    else:
        better = ""
        if verdict.margin is not None:
            better = f" fits clearly better than {_listed(verdict.apart)} (AICc lower by {verdict.margin:.1f} or more)"
        said = f"{titles[0]}{better}; {life} is {age_text(lives[0], life_unit)}."
    poor = " None of the families describes these units well (Anderson-Darling)." if verdict.poor else ""
    return said + poor


def disagreement_caution(found: Disagreement, reading: Reading, life_unit: str) -> Caution:
    """Return the caution that another family fits as well, or better, and says something else."""
    if reading.estimate is None:
        raise ValueError("A reading without an estimate has nothing to disagree with.")
    own, other = (value_text(reading.ask, value, life_unit) for value in (reading.estimate, found.value))
    what = f"puts the {ask_title(reading.ask, life_unit)} at {other} instead of {own}"
    if found.is_clear:
        text = (
            f"{found.title} fits clearly better (AICc lower by {found.gain:.1f}) and {what}: consider it as the family."
        )
    else:
        text = (
            f"{found.title} fits these units as well and {what}: the units cannot tell the two apart, so compare the "
            "families and rely on the less favourable one until more failures decide."
        )
    return Caution("families-disagree", Severity.CAUTION, text)


def _listed(titles: Sequence[str]) -> str:
    """Return titles of families as a list in mid-sentence, where only the names of persons keep their capital."""
    names = [title if title.startswith(_PERSONS) else title[0].lower() + title[1:] for title in titles]
    return names[0] if len(names) == 1 else f"{', '.join(names[:-1])} and {names[-1]}"


def _opening(text: str) -> str:
    return text[0].upper() + text[1:]


def listed_names(names: Sequence[str]) -> str:
    """Return the names of units as a list, those after the third as "others"."""
    return ", ".join(names[:_NAMES_SHOWN]) + (" and others" if len(names) > _NAMES_SHOWN else "")


def repeated_caution(names: Sequence[str]) -> Caution:
    """Return the caution that units of one name stand in several rows and are counted in each."""
    shown = listed_names(names)
    return Caution(
        "units-repeated",
        Severity.CAUTION,
        f"More than one row is called {shown}: every row counts as a unit of its own; delete those that are the same.",
    )
