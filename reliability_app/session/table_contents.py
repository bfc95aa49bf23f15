"""What the tables that leave the program hold: the readings of a set, sets side by side, units, families compared."""

from __future__ import annotations

import re
from collections.abc import Sequence

from reliability_app.engine.cautions import Caution, worst_first
from reliability_app.session.analysis import SetAnalysis
from reliability_app.session.candidate_table import CandidateTable
from reliability_app.session.document import Ask, LifeAsk, Session
from reliability_app.session.json_write import is_number
from reliability_app.session.number_style import number_style
from reliability_app.session.picture import Reading
from reliability_app.session.plain_output import cautions_of
from reliability_app.session.row_reading import HEADINGS, NUMBER_COLUMNS
from reliability_app.session.tables_out import Cell, NumberCell, TableOut, number_cell
from reliability_app.session.taking_readings import bound_side
from reliability_app.session.wording import (
    BOUND_TITLES,
    SAFE_SIDES,
    SIDE_TITLES,
    STANDING_CAUTION,
    Toward,
    as_given,
    ask_title,
    basis_text,
    counts_text,
    is_age,
    number_text,
    parameters_text,
    value_text,
)

NO_TEST_OF_DIFFERENCE = (
    "Bounds that overlap do not show that sets are alike: they are no test of a difference, and none is made here."
)
"""Common practice: overlapping bounds of two sets are not read as a test."""

_READING_HEADINGS = (
    "Set",
    "Reading",
    "Estimate",
    "Lower",
    "Upper",
    "Confidence",
    "Side",
    "Bound",
    "Family",
    "Failed",
    "Units",
)
_POWER = re.compile(" × 10([⁻⁰¹²³⁴⁵⁶⁷⁸⁹]+)")
_FROM_SUPERSCRIPTS = str.maketrans("⁻⁰¹²³⁴⁵⁶⁷⁸⁹", "-0123456789")
_MOST_EXACT_DIGITS = 15  # of a decimal number that every reader keeps


def readings_table(analysis: SetAnalysis) -> TableOut:
    """Return the readings of one set with what they rest on, and all cautions below."""
    question = analysis.question
    rows = tuple(_reading_row(analysis, reading) for reading in analysis.readings)
    return TableOut(
        f"{question.name} readings",
        _READING_HEADINGS,
        rows,
        (*_basis_notes(analysis), *(("Caution", caution.text) for caution in cautions_of(analysis))),
    )


def side_by_side_table(analyses: Sequence[SetAnalysis]) -> TableOut:
    """Return the readings of several sets with a row for each reading and columns for each set.

    A column of bounds that no reading of the set has is left out.
    """
    titles = [reading_title(reading.ask, _unit(analyses)) for reading in _longest(analyses)]
    headings = ["Reading"]
    columns: list[list[Cell]] = [list(titles)]
    for analysis in analyses:
        for place, word in enumerate(("estimate", "lower", "upper")):
            cells = [_end_cell(reading, place, _unit(analyses)) for reading in analysis.readings]
            if place == 0 or any(cells):
                headings.append(f"{analysis.question.name}: {word}")
                columns.append([*cells, *[""] * (len(titles) - len(cells))])
    notes = [note for analysis in analyses for note in _basis_notes(analysis, named=True)]
    notes += [("Note", NO_TEST_OF_DIFFERENCE)] if len(analyses) > 1 else []
    return TableOut(
        "Readings side by side",
        tuple(headings),
        tuple(zip(*columns, strict=True)),
        (*notes, *_joint_cautions(analyses)),
    )


def units_table(session: Session, set_index: int) -> TableOut:
    """Return the units of one set as they stand in the grid, empty columns left out.

    A column of the user's own holds numbers if each of its cells is one that every spreadsheet keeps exactly. Nothing
    stands below: these are the data that were given, and whatever reads them again would take it for units.
    """
    chosen = session.sets[set_index]
    table, unit = chosen.table, session.life_unit
    columns = [column for column in table.columns if column in ("life", "state") or any(table.texts(column))]
    headings = [HEADINGS.get(column, column) for column in columns]
    return TableOut(
        f"{chosen.name} units",
        tuple(f"{title} ({unit})" if title == HEADINGS["life"] and unit else title for title in headings),
        tuple(zip(*(_unit_cells(column, table.texts(column)) for column in columns), strict=True)),
    )


def candidates_table(compared: CandidateTable) -> TableOut:
    """Return the families compared, best first, with what they were fitted to and the verdict below."""
    question = compared.question
    life = LifeAsk(compared.percent)
    titles = [
        reading_title(life, question.life_unit) if title == compared.life_title else title
        for title in compared.headings
    ]
    rows: list[tuple[Cell, ...]] = []
    for place, one in enumerate(compared.candidates):
        shown = compared.cells(place)
        test, straight = one.anderson_darling, one.correlation
        values = (
            one.log_likelihood if one.is_fitted else None,
            one.aicc,
            one.bic,
            None if test is None else test.p_value,
            None if straight is None else straight.statistic,
        )
        numbers = [number_cell(value, text) for value, text in zip(values, shown[1:6], strict=True)]
        age = number_cell(one.life, "" if one.life is None else _plain(number_text(one.life)))
        rows.append((one.title, *numbers, age, shown[7]))
    reasons = dict.fromkeys(one.goodness.reason for one in compared.candidates if one.goodness and one.goodness.reason)
    notes = [
        ("Basis", f"{question.name}, {counts_text(question.counts)}, every family by maximum likelihood"),
        ("Comparison", compared.sentence),
        *(("Goodness of fit", reason) for reason in reasons),
        ("Caution", STANDING_CAUTION.text),
    ]
    return TableOut(f"{question.name} candidates", tuple(titles), tuple(rows), tuple(notes))


def whole_basis(analysis: SetAnalysis) -> str:
    """Return what the readings of a set rest on, with the confidence and the side of its bounds."""
    question, basis = analysis.question, analysis.question.basis
    bounds = f"{as_given(100 * basis.confidence)} %, {SIDE_TITLES[basis.side]}"
    return f"{basis_text(basis, question.counts, analysis.main)}, {bounds}"


def reading_title(ask: Ask, life_unit: str) -> str:
    """Return what was asked, with the unit of a plain number that answers it."""
    return ask_title(ask, life_unit) + (f" ({life_unit})" if is_age(ask) and life_unit else "")


def _reading_row(analysis: SetAnalysis, reading: Reading) -> tuple[Cell, ...]:
    question, basis = analysis.question, reading.basis
    failed = question.counts.failed + question.counts.found_failed
    used = reading.bound_used or basis.bound
    bound = BOUND_TITLES.get(used, used) + (" (provisional)" if reading.is_provisional else "")
    return (
        question.name,
        reading_title(reading.ask, question.life_unit),
        *(_end_cell(reading, place, question.life_unit) for place in range(3)),
        NumberCell(basis.confidence, f"{basis.confidence:g}"),
        bound_side(reading.ask, basis.side),
        bound,
        basis.family,
        NumberCell(failed, str(failed)),
        NumberCell(failed + question.counts.running, str(failed + question.counts.running)),
    )


def _end_cell(reading: Reading, place: int, life_unit: str) -> Cell:
    """Return the estimate (0), the lower (1) or the upper end (2); bounds shown are rounded to their safe side."""
    value = (reading.estimate, reading.lower, reading.upper)[place]
    toward: Toward = ("nearest", *SAFE_SIDES)[place]
    if value is None:
        return ""
    return number_cell(value, _shown_digits(reading.ask, value, life_unit, toward))


def _shown_digits(ask: Ask, value: float, life_unit: str, toward: Toward) -> str:
    """Return a value with the digits shown in the window, as a plain number without its unit."""
    said = value_text(ask, value, life_unit, toward=toward)
    return _plain(said.removesuffix(f" per {life_unit}").removesuffix(f" {life_unit}") if life_unit else said)


def _plain(said: str) -> str:
    power = _POWER.search(said)
    exponent = f"e{power[1].translate(_FROM_SUPERSCRIPTS)}" if power else ""
    return _POWER.sub(exponent, said).replace(number_style().mark, "")


def _basis_notes(analysis: SetAnalysis, *, named: bool = False) -> list[tuple[str, str]]:
    basis = whole_basis(analysis)
    parameters = parameters_text(analysis.fit)
    kind = f"Basis of {analysis.question.name}" if named else "Basis"
    return [(kind, f"{basis}; {parameters}" if parameters else basis)]


def _joint_cautions(analyses: Sequence[SetAnalysis]) -> list[tuple[str, str]]:
    """Return every caution once, worst first, with the sets it is about; the standing one last."""
    named: dict[Caution, list[str]] = {}
    for analysis in analyses:
        for caution in dict.fromkeys(cautions_of(analysis)):
            named.setdefault(caution, []).append(analysis.question.name)
    found = [caution for caution in worst_first(tuple(named)) if caution != STANDING_CAUTION]
    said = [("Caution", f"{', '.join(named[caution])}: {caution.text}") for caution in found]
    return [*said, ("Caution", STANDING_CAUTION.text)]


def _unit_cells(column: str, texts: Sequence[str]) -> list[Cell]:
    if column in NUMBER_COLUMNS:
        return [NumberCell(float(text), text) if is_number(text) else text for text in texts]
    if column in HEADINGS or not all(is_number(text) and len(text) <= _MOST_EXACT_DIGITS for text in texts if text):
        return list(texts)
    return [NumberCell(float(text), text) if text else "" for text in texts]


def _longest(analyses: Sequence[SetAnalysis]) -> tuple[Reading, ...]:
    return max((analysis.readings for analysis in analyses), key=len, default=())


def _unit(analyses: Sequence[SetAnalysis]) -> str:
    return analyses[0].question.life_unit if analyses else ""
