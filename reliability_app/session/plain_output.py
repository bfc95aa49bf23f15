"""Finished analyses as text for a terminal and as one JSON object for scripts."""

from __future__ import annotations

import json
from collections.abc import Sequence

from reliability_app.engine.cautions import Caution, Severity, together, worst_first
from reliability_app.session.analysis import SetAnalysis
from reliability_app.session.document import Ask, HazardAsk, LifeAsk, ReliabilityAsk
from reliability_app.session.picture import Reading
from reliability_app.session.taking_readings import bound_side
from reliability_app.session.wording import (
    STANDING_CAUTION,
    all_counts_text,
    ask_title,
    basis_text,
    parameters_text,
    reading_sentence,
)

MARKS = {Severity.SERIOUS: "!!", Severity.CAUTION: "!", Severity.NOTE: "-"}


def cautions_of(analysis: SetAnalysis) -> tuple[Caution, ...]:
    """Return all cautions of a set and its readings, worst first, the standing one last."""
    found = [*analysis.cautions, *(caution for reading in analysis.readings for caution in reading.cautions)]
    others = tuple(caution for caution in found if caution != STANDING_CAUTION)
    return (*together(worst_first(others)), STANDING_CAUTION)


def as_text(analyses: Sequence[SetAnalysis], life_unit: str) -> str:
    """Return the reading sentences of every set with their basis and cautions, for a terminal."""
    paragraphs = []
    for analysis in analyses:
        question = analysis.question
        lines = [f"{question.name}: {all_counts_text(question.counts)}"]
        lines += [f"  {reading_sentence(reading, life_unit)}" for reading in analysis.readings if _is_given(reading)]
        lines.append(f"  ({basis_text(question.basis, question.counts, analysis.main)})")
        if parameters := parameters_text(analysis.fit):
            lines.append(f"  {parameters}")
        lines += [f"  {MARKS[caution.severity]} {caution.text}" for caution in cautions_of(analysis)]
        paragraphs.append("\n".join(lines))
    return "\n\n".join(paragraphs)


def statement(analysis: SetAnalysis) -> str:
    """Return the main reading with its basis and every caution that concerns it, to be pasted elsewhere."""
    question, main = analysis.question, analysis.main
    cautions = worst_first((*(main.cautions if main else ()), *analysis.cautions))
    ordered = [caution for caution in cautions if caution != STANDING_CAUTION]
    sentence = reading_sentence(main, question.life_unit) if main else "No reading."
    lines = [f"{question.name}: {sentence}", f"({basis_text(question.basis, question.counts, main)})"]
    lines += [parameters] if (parameters := parameters_text(analysis.fit)) else []
    said = (*ordered, STANDING_CAUTION)
    return "\n".join([*lines, *(f"{MARKS[caution.severity]} {caution.text}" for caution in said)])


def readings_as_tab_separated(analysis: SetAnalysis) -> str:
    """Return the readings as rows for a spreadsheet, with what they rest on, and the cautions below them."""
    question = analysis.question
    unit, counts = question.life_unit, question.counts
    head = ["Set", "Reading", "Estimate", "Lower", "Upper", "Confidence", "Side", "Bound", "Family", "Failed", "Units"]
    failed = counts.failed + counts.found_failed
    rows = [head]
    for reading in analysis.readings:
        numbers = [_plain(value) for value in (reading.estimate, reading.lower, reading.upper)]
        basis = reading.basis
        words = [
            str(basis.confidence),
            bound_side(reading.ask, basis.side),
            reading.bound_used or basis.bound,
            basis.family,
        ]
        title = ask_title(reading.ask, unit) + (f" ({unit})" if isinstance(reading.ask, LifeAsk) and unit else "")
        rows.append([question.name, title, *numbers, *words, str(failed), str(failed + counts.running)])
    cautions = [["Caution", caution.text] for caution in cautions_of(analysis)]
    return "\n".join("\t".join(row) for row in [*rows, *cautions])


def _plain(value: float | None) -> str:
    return "" if value is None else f"{value:.6g}"


def as_json(analyses: Sequence[SetAnalysis], file: str, life_unit: str) -> str:
    """Return everything as one JSON object; absent numbers are null."""
    return json.dumps(
        {"file": file, "life_unit": life_unit, "sets": [_set_object(analysis) for analysis in analyses]},
        indent=2,
        ensure_ascii=False,
        allow_nan=False,
    )


def has_readings(analyses: Sequence[SetAnalysis]) -> bool:
    """True where at least one reading has a number."""
    return any(_is_given(reading) for analysis in analyses for reading in analysis.readings)


def _is_given(reading: Reading) -> bool:
    return reading.estimate is not None


def _set_object(analysis: SetAnalysis) -> dict[str, object]:
    question, fitted = analysis.question, analysis.fit
    counts, basis = question.counts, question.basis
    covariance = None if fitted is None or fitted.covariance is None else fitted.covariance.tolist()
    return {
        "name": question.name,
        "failed": counts.failed,
        "running": counts.running,
        "found_failed": counts.found_failed,
        "unread": counts.unread,
        "family": basis.family,
        "fit": basis.fit,
        "converged": fitted is not None and fitted.converged,
        "parameters": fitted.parameters if fitted else None,
        "standard_errors": fitted.standard_errors if fitted else None,
        "covariance": covariance,
        "covariance_of": list(fitted.coordinates) if fitted else None,
        "log_likelihood": fitted.log_likelihood if fitted else None,
        "aicc": fitted.aicc if fitted else None,
        "readings": [_reading_object(reading) for reading in analysis.readings],
        "cautions": [
            {"code": caution.code, "severity": caution.severity.name.lower(), "text": caution.text}
            for caution in cautions_of(analysis)
        ],
    }


def _reading_object(reading: Reading) -> dict[str, object]:
    basis = reading.basis
    return {
        **_ask_object(reading.ask),
        "estimate": reading.estimate,
        "lower": reading.lower,
        "upper": reading.upper,
        "side": bound_side(reading.ask, basis.side),
        "confidence": basis.confidence,
        "bound": basis.bound,
        "bound_used": reading.bound_used or None,
    }


def _ask_object(ask: Ask) -> dict[str, object]:
    match ask:
        case LifeAsk():
            return {"ask": "life", "percent": ask.percent}
        case ReliabilityAsk():
            return {"ask": "reliability", "age": ask.age}
        case HazardAsk():
            return {"ask": "hazard", "age": ask.age}
