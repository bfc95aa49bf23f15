"""What stands below a picture: the readings of its sets, what they rest on, and every caution once."""

from __future__ import annotations

from collections.abc import Sequence

from reliability_app.engine.cautions import Caution, worst_first
from reliability_app.session.analysis import SetAnalysis
from reliability_app.session.plain_output import MARKS, statement
from reliability_app.session.wording import STANDING_CAUTION, basis_text, reading_sentence


def joint_statement(analyses: Sequence[SetAnalysis]) -> str:
    """Return the main readings of sets shown together, one paragraph a line; a caution names the sets it is about."""
    if len(analyses) == 1:
        return statement(analyses[0])
    named: dict[Caution, list[str]] = {}
    for analysis in analyses:
        for caution in dict.fromkeys((*(analysis.main.cautions if analysis.main else ()), *analysis.cautions)):
            named.setdefault(caution, []).append(analysis.question.name)
    said = [caution for caution in worst_first(tuple(named)) if caution != STANDING_CAUTION]
    cautions = [f"{MARKS[caution.severity]} {', '.join(named[caution])}: {caution.text}" for caution in said]
    standing = [f"{MARKS[STANDING_CAUTION.severity]} {STANDING_CAUTION.text}"]
    return "\n".join([*(_reading_line(analysis) for analysis in analyses), *cautions, *standing])


def _reading_line(analysis: SetAnalysis) -> str:
    question, main = analysis.question, analysis.main
    sentence = reading_sentence(main, question.life_unit) if main else "No reading."
    return f"{question.name}: {sentence} ({basis_text(question.basis, question.counts, main)})"
