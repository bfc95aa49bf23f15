"""What the lines of a page mean, in a sentence or two: below the chart in the window and in print."""

from __future__ import annotations

from collections.abc import Sequence

from reliability_app.engine.families import FAMILY_NAMES, family
from reliability_app.session.further_pictures import FurtherPicture, RegionPicture, ResidualPicture
from reliability_app.session.picture import SetPicture
from reliability_app.session.wording import as_given

_STEPS_CONFIDENCE = "with two-sided 95 % bounds at each age (dotted)"


def survival_caption(pictures: Sequence[SetPicture]) -> str:
    """Say what the steps are."""
    steps = [picture.steps for picture in pictures if picture.steps is not None]
    if not steps:
        return ""
    bounded = [curve.lower is not None for curve in steps]
    kinds = [f"Kaplan-Meier's {_STEPS_CONFIDENCE}"] * any(bounded) + ["Turnbull's, for units found failed"] * (
        not all(bounded)
    )
    return f"Steps: the estimate without a family, {' or '.join(kinds)}."


def cumulative_caption(further: Sequence[FurtherPicture]) -> str:
    """Say what the steps are."""
    found = [one.has_found_failed for one in further if one.hazard_steps is not None]
    if not found:
        return ""
    kinds = [f"Nelson-Aalen's {_STEPS_CONFIDENCE}"] * (not all(found)) + [
        "-ln of Turnbull's estimate, for units found failed"
    ] * any(found)
    return f"Steps: the cumulative hazard without a family, {' or '.join(kinds)}."


def density_caption(further: Sequence[FurtherPicture]) -> str:
    """Say what the band is."""
    drawn = [one for one in further if one.density is not None]
    banded = [one for one in drawn if one.density is not None and one.density.lower is not None]
    if not drawn:
        return ""
    if not banded:
        return "No band: none is known for the density of this family, method or plan."
    kinds = dict.fromkeys("Wald" if one.density_band == "wald" else "likelihood ratio" for one in banded)
    percents = dict.fromkeys(_percent(one.analysis.question.basis.confidence) for one in banded)
    said = f"Band: two-sided {' and '.join(percents)} at each age by itself, {' and '.join(kinds)}"
    return f"{said}; no side is the safe one."


def region_caption(regions: Sequence[RegionPicture], left_out: Sequence[str] = ()) -> str:
    """Say what the two outlines are, and which sets are not drawn."""
    if not regions:
        return ""
    one = regions[0]
    side = {"lower": "one-sided", "upper": "one-sided", "two": "two-sided"}[one.side]
    said = (
        f"Shaded: both parameters at once with {_percent(one.confidence)} confidence (likelihood ratio, chi-square "
        f"with 2 degrees of freedom). Thin inner outline: the cut for one parameter (1 degree), whose extremes are "
        f"the {side} {_percent(one.confidence)} likelihood-ratio bounds. Mark: the maximum."
    )
    others = f" Not drawn, being of another family or without a region: {', '.join(left_out)}." if left_out else ""
    return said + others


def residual_caption(pictures: Sequence[ResidualPicture]) -> str:
    """Say what the residuals and the envelope are."""
    if not pictures:
        return ""
    drawn = any(bool(picture.is_drawn.any()) for picture in pictures)
    thinned = any(picture.units > picture.value.size for picture in pictures)
    return (
        "Each unit's life as a normal score under the fit. If the family is right the marks keep to the line; between "
        "the thin lines the one of each rank lies with 95 % probability (a little less far apart, as the parameters "
        "are estimated)."
        + (
            " Open marks: units not seen to fail at a known age, their score drawn at random from what is known."
            * drawn
        )
        + (" Of very many units evenly spaced ranks are shown." * thinned)
    )


def parameter_titles(family_name: str, names: tuple[str, str], life_unit: str) -> tuple[str, str]:
    """Return the titles of two customary parameters, with their unit where they have one."""
    of_log = family(family_name).of_log_life if family_name in FAMILY_NAMES else True
    in_life = f" ({life_unit})" if life_unit else ""
    of_ln = f" (of ln life{f' in {life_unit}' if life_unit else ''})" if of_log else in_life

    def titled(name: str) -> str:
        if name in ("mu", "sigma"):
            return f"{name}{of_ln}"
        dimensioned = name in ("scale", "mean") or (name == "shape" and family_name == "inverse_gaussian")
        return f"{name.capitalize()}{in_life if dimensioned else ''}"

    return titled(names[0]), titled(names[1])


def _percent(confidence: float) -> str:
    return f"{as_given(round(100.0 * confidence, 9))} %"
