"""Finished analyses as text for a terminal and as one JSON object for scripts."""

from __future__ import annotations

import json
from collections.abc import Sequence
from dataclasses import asdict
from itertools import zip_longest
from math import isfinite

from reliability_app.engine.cautions import Caution, Severity, together, worst_first
from reliability_app.session.analysis import SetAnalysis
from reliability_app.session.compared_families import ComparedFamilies, as_objects, table_lines
from reliability_app.session.document import ASK_NAMES
from reliability_app.session.picture import Reading
from reliability_app.session.plan_simulation import SimulatedPlan
from reliability_app.session.taking_readings import bound_side
from reliability_app.session.wording import (
    STANDING_CAUTION,
    all_counts_text,
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


def as_text(
    analyses: Sequence[SetAnalysis],
    life_unit: str,
    compared: Sequence[ComparedFamilies | None] = (),
    plans: Sequence[SimulatedPlan] = (),
) -> str:
    """Return the reading sentences of every set with their basis and cautions, for a terminal.

    `compared` and `plans` hold one entry a set, or none at all.
    """
    paragraphs = []
    for analysis, families, plan in zip_longest(analyses, compared, plans):
        question = analysis.question
        lines = [f"{question.name}: {all_counts_text(question.counts)}"]
        lines += [f"  {reading_sentence(reading, life_unit)}" for reading in analysis.readings if reading.is_given]
        lines.append(f"  ({basis_text(question.basis, question.counts, analysis.main)})")
        lines += [f"  {analysis.main.measured}"] if analysis.main and analysis.main.measured else []
        if parameters := parameters_text(analysis.fit):
            lines.append(f"  {parameters}")
        lines += [f"  {line}" for line in (table_lines(families) if families else ())]
        lines += [f"  {plan.sentence}"] if plan else []
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
    lines += [main.measured] if main and main.measured else []
    lines += [parameters] if (parameters := parameters_text(analysis.fit)) else []
    said = (*ordered, STANDING_CAUTION)
    return "\n".join([*lines, *(f"{MARKS[caution.severity]} {caution.text}" for caution in said)])


def as_json(
    analyses: Sequence[SetAnalysis],
    file: str,
    life_unit: str,
    compared: Sequence[ComparedFamilies | None] = (),
    plans: Sequence[SimulatedPlan] = (),
) -> str:
    """Return everything as one JSON object; absent numbers are null.

    `compared` and `plans` hold one entry a set, or none at all.
    """
    sets = [
        {
            **_set_object(analysis),
            **(as_objects(families) if families else {}),
            **({"plan": _plan_object(plan)} if plan else {}),
        }
        for analysis, families, plan in zip_longest(analyses, compared, plans)
    ]
    return json.dumps(
        {"file": file, "life_unit": life_unit, "sets": sets},
        indent=2,
        ensure_ascii=False,
        allow_nan=False,
    )


def has_readings(analyses: Sequence[SetAnalysis]) -> bool:
    """True where at least one reading has a number."""
    return any(reading.is_given for analysis in analyses for reading in analysis.readings)


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
        "threshold": basis.threshold,
        "shape": basis.shape,
        "converged": fitted is not None and fitted.converged,
        "parameters": fitted.parameters if fitted else None,
        "standard_errors": fitted.standard_errors if fitted else None,
        "covariance": covariance,
        "covariance_of": list(fitted.coordinates) if fitted else None,
        "log_likelihood": fitted.log_likelihood if fitted else None,
        "aicc": fitted.aicc if fitted else None,
        "readings": [_reading_object(reading, question.life_unit) for reading in analysis.readings],
        "cautions": [
            {"code": caution.code, "severity": caution.severity.name.lower(), "text": caution.text}
            for caution in cautions_of(analysis)
        ],
    }


def _plan_object(plan: SimulatedPlan) -> dict[str, object]:
    coverage = [asdict(one) for one in plan.coverages]
    return {"percent": plan.percent, "coverage": coverage, "sentence": plan.sentence}


def _reading_object(reading: Reading, life_unit: str) -> dict[str, object]:
    basis, estimate = reading.basis, reading.estimate
    return {
        "ask": ASK_NAMES[type(reading.ask)],
        **asdict(reading.ask),
        "estimate": estimate if estimate is not None and isfinite(estimate) else None,
        "lower": reading.lower,
        "upper": reading.upper,
        "side": bound_side(reading.ask, basis.side),
        "confidence": basis.confidence,
        "bound": basis.bound,
        "bound_used": reading.bound_used or None,
        **({"measured": reading.measured} if reading.measured else {}),
        **({} if reading.share_failed is None else {"share_failed": reading.share_failed}),
        "sentence": reading_sentence(reading, life_unit),
    }
