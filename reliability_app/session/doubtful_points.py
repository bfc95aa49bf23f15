"""Decides whether the points of lives like "1.250" are decimal points or set off thousands, or has it asked."""

from __future__ import annotations

import re
from collections.abc import Collection, Iterable, Mapping, Sequence
from dataclasses import dataclass

from reliability_app.session.column_texts import number_ends
from reliability_app.session.numbers import DecimalMark, proven_mark, quoted
from reliability_app.session.row_reading import HEADINGS
from reliability_app.session.states import plain_words
from reliability_app.session.understanding import OpenQuestion, Option

_AGES = ("life", "until", "entered")
_POINTED = re.compile(r"[0-9]\.[0-9]|\.[0-9]").search
_DOUBTFUL = re.compile(r"[<>\u2264\u2265]?=? *([1-9][0-9]{0,2})\.([0-9]{3}) *\+?").fullmatch
_DOUBTFUL_COMMA = re.compile(r"[<>\u2264\u2265]?=? *[1-9][0-9]{0,2},[0-9]{3} *\+?").fullmatch
_WHOLE = re.compile(r"[<>\u2264\u2265]?=? *[1-9][0-9]{2,} *\+?").fullmatch
# Words of German tables that no English one has: who writes these sets off thousands by points (common practice).
_GERMAN_WORDS = """
lebensdauer laufzeit laufstrecke laufleistung betriebsdauer betriebszeit betriebsstunden standzeit alter zeit
stunden zyklen lastwechsel tage wochen monate jahre zustand ergebnis befund anzahl menge stuck stueck stuckzahl
stueckzahl eintrittsalter einheit prufling pruefling bauteil seriennummer nummer ursache ausfallursache
ausfallart fehlerart bemerkung bemerkungen kommentar ausgefallen ausfall defekt lauft laeuft betrieb ordnung intakt
zensiert durchlaufer durchlaeufer uberlebt ueberlebt gebrochen bruch
"""
_GERMAN = frozenset(_GERMAN_WORDS.split())


@dataclass(frozen=True)
class PointsInDoubt:
    """Lives whose points may be read in two ways, and how they are read.

    `mark` is the decimal mark decided on; AMBIGUOUS, with a `question`, if nothing tells: points are then decimal
    points until it is answered. `note` is a sentence that says so.
    """

    mark: DecimalMark
    note: str
    question: OpenQuestion | None = None


def points_in_doubt(
    texts: Mapping[str, Sequence[str]], *, separator: str = "", words: Iterable[str] = ()
) -> PointsInDoubt | None:
    """Return how points are read where every one in the ages stands before exactly three digits; None if not so.

    Parameters
    ----------
    texts : mapping of str to sequence of str
        The cells of the columns of numbers, as typed; none from cells that held true numbers.
    separator : str
        What stands between the cells of the text they are from; "" if that is not known.
    words : iterable of str
        Headings and words for states: German ones speak for thousands.
    """
    ages = {key: number_ends(texts[key]) for key in _AGES if key in texts}
    first = _first_in_doubt(ages)
    if first is None:
        return None
    proven = {proven_mark(number_ends(cells)) for cells in texts.values()}
    if DecimalMark.COMMA in proven and DecimalMark.POINT not in proven:
        return None  # another column settles it, and says so by itself
    thousands = _says_thousands(ages, separator, words)
    has_points = proven == {None, DecimalMark.POINT}
    whole, fraction, said = _readings(*first)
    if thousands and not has_points:
        note = f"{said} was read as {whole}: the point sets off thousands, since {thousands}"
        return PointsInDoubt(DecimalMark.COMMA, f"{note}; change it under Numbers.")
    if has_points and not thousands:
        note = f"{said} was read as {fraction}: other columns have decimal points too; change it under Numbers."
        return PointsInDoubt(DecimalMark.POINT, note)
    options = (Option(whole, {"mark": DecimalMark.COMMA}), Option(fraction, {"mark": DecimalMark.POINT}))
    return PointsInDoubt(
        DecimalMark.AMBIGUOUS,
        f"{said} was read as {fraction} but may mean {whole}; change it under Numbers if the point sets off thousands.",
        OpenQuestion(f"{said}: which number is it?", options),
    )


def _first_in_doubt(ages: Mapping[str, Sequence[str]]) -> tuple[str, str] | None:
    """Return the column and the cell of the first doubtful point; None where some number settles how all are meant."""
    first = None
    for key, cells in ages.items():
        for cell in cells:
            if _POINTED(cell):
                if not _DOUBTFUL(cell):
                    return None
                first = first or (key, cell)
            elif "," in cell and _DOUBTFUL_COMMA(cell):
                return None  # commas are asked about already, and the answer is for both signs
    return first


def _says_thousands(ages: Mapping[str, Sequence[str]], separator: str, words: Iterable[str]) -> str:
    """Return what speaks for thousands, as the end of a sentence; "" if nothing does."""
    if separator == ";":
        return "the cells are separated by semicolons"
    wholes = (cell for cells in ages.values() for cell in cells if _WHOLE(cell))
    if (beside := next(wholes, None)) and not _is_any_large(ages.values()):
        return f"{quoted(beside)} stands beside it"
    german = next((word for word in words if _GERMAN & set(plain_words(word).split())), None)
    return f"{quoted(german, 24)} is German" if german else ""


def _is_any_large(columns: Collection[Sequence[str]]) -> bool:
    """Return whether a doubtful number has 100 or more before its point: then 812.125 may well stand beside 850."""
    return any((match := _DOUBTFUL(cell)) and len(match[1]) > 2 for cells in columns for cell in cells)


def _readings(key: str, cell: str) -> tuple[str, str, str]:
    """Return a doubtful number without its point, with it, and what names it in a sentence."""
    match = _DOUBTFUL(cell)
    assert match is not None  # it is the one found in doubt
    fraction = f"{match[1]}.{match[2]}".rstrip("0").rstrip(".")
    return match[1] + match[2], fraction, f"{HEADINGS[key]} {quoted(cell)}"
