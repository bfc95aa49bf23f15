"""The command `rigpaper`: opens the window, or reads a file without one.

rigpaper                 open the window, empty
rigpaper FILE            open a session or a table; on a machine without a screen, print its readings
rigpaper read FILE ...   print the readings of a file
rigpaper visits SESSION ...   follow a reading through the visits of a session, with foretold beside found
rigpaper update SESSION TABLE ...   tell what a newer table changes in a session, and with --write save it
rigpaper picture FILE --page PAGE --out PICTURE ...   draw a page of a file as SVG, PDF or PNG
"""

from __future__ import annotations

import argparse
import sys
from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from reliability_app import __version__
from reliability_app.system_libraries import display_reason, drawing_reason

if TYPE_CHECKING:  # numerical libraries are imported by the work that needs them
    from reliability_app.session.reading_request import Answer

DONE, NO_READING, WRONG_USAGE = 0, 1, 2
_FILE_HELP = "a session (.json) or a table (.csv, .tsv, .xlsx, .xls, .ods)"
_SHEET_HELP = "the sheet of a spreadsheet file; the first that reads as units, if not given"


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command and return its exit status: 0 done, 1 no reading or no window, 2 wrong usage."""
    words = list(sys.argv[1:] if arguments is None else arguments)
    _let_streams_write_anything()
    try:
        if words[:1] == ["read"]:
            return _read(_read_parser().parse_args(words[1:]))
        if words[:1] == ["visits"]:
            return _visits(_visits_parser().parse_args(words[1:]))
        if words[:1] == ["update"]:
            return _update(_update_parser().parse_args(words[1:]))
        if words[:1] == ["picture"]:
            return _picture(_picture_parser().parse_args(words[1:]))
        return _open(_open_parser().parse_args(words))
    except BrokenPipeError:
        # The reader of our output went away (as `head` does); there is nobody left to tell.
        sys.stderr.close()
        return DONE


def _open_parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="rigpaper",
        description="Analyse times to failure: open the window, or see `rigpaper read --help` for work without one.",
    )
    parser.add_argument("file", nargs="?", type=Path, metavar="FILE", help=_FILE_HELP)
    parser.add_argument("--version", action="version", version=f"Rigpaper {__version__}")
    return parser


def _read_parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="rigpaper read",
        description="Print the readings of a session or a table, with their bounds and cautions.",
    )
    parser.add_argument("file", type=Path, metavar="FILE", help=_FILE_HELP)
    _add_readings(parser.add_argument_group("readings"))
    _add_basis(parser.add_argument_group("basis", "what the session says, if not given"))
    more = parser.add_argument_group("more")
    more.add_argument("--candidates", action="store_true", help="compare all families")
    more.add_argument(
        "--simulate-plan", dest="plan", action="store_true", help="say how often each kind of bound would have held"
    )
    more.add_argument("--set", dest="set_name", metavar="NAME", help="read only the set of this name")
    more.add_argument("--visit", metavar="VISIT", help="read what a visit recorded: its number from 1, or its label")
    more.add_argument("--sheet", metavar="NAME", help=_SHEET_HELP)
    more.add_argument("--json", action="store_true", help="print one JSON object")
    return parser


def _visits_parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="rigpaper visits",
        description="Follow the main reading of a session through its visits up to today: how it moved, what changed "
        "between them, and whether what failed is what was foretold.",
    )
    parser.add_argument("file", type=Path, metavar="SESSION", help="a session (.json)")
    _add_readings(parser.add_argument_group("readings", "the first is followed; that of the session, if not given"))
    parser.add_argument("--set", dest="set_name", metavar="NAME", help="only the set of this name")
    parser.add_argument("--list", dest="foretold", action="store_false", help="leave out foretold and found: quicker")
    parser.add_argument("--json", action="store_true", help="print one JSON object")
    return parser


def _update_parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="rigpaper update",
        description="Hold a newer table of units against a set of a session, unit by unit, and tell what changes. "
        "Nothing is written without --write. Exit status 0: something changes; 1: nothing.",
    )
    parser.add_argument("file", type=Path, metavar="SESSION", help="a session (.json)")
    parser.add_argument("table", type=Path, metavar="TABLE", help="a table (.csv, .tsv, .xlsx, .xls, .ods)")
    parser.add_argument("--set", dest="set_name", metavar="NAME", help="the set; needed where there are several")
    parser.add_argument("--sheet", metavar="NAME", help=_SHEET_HELP)
    parser.add_argument(
        "--take", nargs="+", action="extend", default=[], metavar="UNIT", help="what is asked about this unit is right"
    )
    parser.add_argument("--write", action="store_true", help="save the session; the state before stays beside it")
    return parser


def _picture_parser() -> argparse.ArgumentParser:
    from reliability_app.reports.page_figures import PAGES

    parser = argparse.ArgumentParser(
        prog="rigpaper picture",
        description="Draw a page of a session or a table, with its readings and cautions below; no screen is needed.",
    )
    parser.add_argument("file", type=Path, metavar="FILE", help=_FILE_HELP)
    parser.add_argument("--page", choices=tuple(PAGES), default="paper", help="what to draw; paper, if not given")
    parser.add_argument("--out", type=Path, required=True, metavar="PICTURE", help="a file called .svg, .pdf or .png")
    parser.add_argument("--size", type=_size, metavar="WxH", help="width and height in mm, such as 160x110")
    parser.add_argument("--dpi", type=int, metavar="N", help="dots an inch of a PNG, such as 200")
    parser.add_argument("--set", dest="set_name", metavar="NAME", help="draw only the set of this name")
    parser.add_argument("--sheet", metavar="NAME", help=_SHEET_HELP)
    _add_readings(parser.add_argument_group("readings", "the first is marked in the picture"))
    _add_basis(parser.add_argument_group("basis", "what the session says, if not given"))
    return parser


def _size(text: str) -> tuple[float, float]:
    try:
        width, height = (float(side) for side in text.lower().replace("×", "x").split("x"))
    except ValueError:
        raise argparse.ArgumentTypeError(f"{text!r} is no size: give width and height in mm, as 160x110") from None
    return width, height


def _add_readings(group: argparse._ArgumentGroup) -> None:
    def numbers(name: str, dest: str, metavar: str, said: str) -> None:
        group.add_argument(
            name, dest=dest, nargs="+", action="extend", type=float, default=[], metavar=metavar, help=said
        )

    numbers("--percent", "percents", "P", "the life at P %% failed")
    numbers("--age", "ages", "T", "the reliability at age T")
    group.add_argument("--given", type=float, metavar="T", help="with --age: of the units that have reached age T")
    numbers("--residual", "residual_ages", "T", "the mean residual life at age T")
    numbers("--hazard-age", "hazard_ages", "T", "the hazard rate at age T")
    numbers("--at-hazard", "hazards", "RATE", "the age at which the hazard rate reaches RATE")
    group.add_argument("--mode", action="store_true", help="the mode of the lives")
    group.add_argument("--mean-life", action="store_true", help="the mean life, below a B-life")


def _add_basis(group: argparse._ArgumentGroup) -> None:
    group.add_argument("--family", help="family of life distributions, such as lognormal or weibull")
    group.add_argument("--fit", metavar="METHOD", help='fit method, such as "maximum likelihood"')
    group.add_argument(
        "--threshold", action=argparse.BooleanOptionalAction, help="estimate a threshold, below which no unit fails"
    )
    group.add_argument("--shape", type=float, metavar="BETA", help="hold the Weibull shape at BETA")
    group.add_argument("--confidence", type=float, metavar="C", help="confidence of each bound, such as 0.95")
    group.add_argument("--side", help="lower, upper or two")
    group.add_argument("--bound", help="kind of bound: automatic, calibrated, likelihood, wald or exact")


_READINGS = ("percents", "ages", "given", "residual_ages", "hazard_ages", "hazards", "mode", "mean_life")
_BASIS = ("family", "fit", "threshold", "shape", "confidence", "side", "bound")


def _read(options: argparse.Namespace) -> int:
    from reliability_app.engine.errors import RigpaperError
    from reliability_app.session.reading_request import RequestRefused

    try:
        answer = _answer(options, candidates=options.candidates, plan=options.plan)
    except RequestRefused as refusal:
        print(f"rigpaper read: {refusal}", file=sys.stderr)
        return WRONG_USAGE
    except RigpaperError as trouble:
        print(f"rigpaper read: {trouble}", file=sys.stderr)
        return NO_READING
    print(answer.as_json() if options.json else answer.as_text())
    for sentence in answer.remarks:
        print(f"rigpaper read: {sentence}", file=sys.stderr)
    return DONE if answer.has_readings else NO_READING


def _visits(options: argparse.Namespace) -> int:
    from reliability_app.engine.errors import RigpaperError
    from reliability_app.session.reading_request import AsksWanted, RequestRefused
    from reliability_app.session.visits_request import visits_request

    try:
        wanted = AsksWanted(**{name: getattr(options, name) for name in _READINGS})
        answer = visits_request(options.file, wanted, set_name=options.set_name, foretold=options.foretold)
    except RequestRefused as refusal:
        print(f"rigpaper visits: {refusal}", file=sys.stderr)
        return WRONG_USAGE
    except RigpaperError as trouble:
        print(f"rigpaper visits: {trouble}", file=sys.stderr)
        return NO_READING
    print(answer.as_json() if options.json else answer.as_text())
    return DONE if answer.has_visits else NO_READING


def _update(options: argparse.Namespace) -> int:
    from reliability_app.engine.errors import RigpaperError
    from reliability_app.session.reading_request import RequestRefused
    from reliability_app.session.update_request import update_request

    try:
        answer = update_request(
            options.file,
            options.table,
            set_name=options.set_name,
            sheet=options.sheet,
            take=options.take,
            write=options.write,
        )
    except RequestRefused as refusal:
        print(f"rigpaper update: {refusal}", file=sys.stderr)
        return WRONG_USAGE
    except RigpaperError as trouble:
        print(f"rigpaper update: {trouble}", file=sys.stderr)
        return NO_READING
    print(answer.as_text())
    for sentence in answer.remarks:
        print(f"rigpaper update: {sentence}", file=sys.stderr)
    return DONE if answer.changes else NO_READING


def _answer(
    options: argparse.Namespace, *, candidates: bool = False, plan: bool = False, with_curves: bool = False
) -> Answer:
    """Read the file of a command with the readings and the basis that were named."""
    from reliability_app.session.reading_request import AsksWanted, read_request

    return read_request(
        options.file,
        AsksWanted(**{name: getattr(options, name) for name in _READINGS}),
        basis={name: getattr(options, name) for name in _BASIS},
        set_name=options.set_name,
        sheet=options.sheet,
        visit=getattr(options, "visit", None),  # a picture has none
        candidates=candidates,
        plan=plan,
        with_curves=with_curves,
    )


def _picture(options: argparse.Namespace) -> int:
    from reliability_app.engine.errors import RigpaperError
    from reliability_app.session.reading_request import RequestRefused

    reason = drawing_reason()
    if reason is not None:
        print(f"rigpaper picture: {reason}", file=sys.stderr)
        return NO_READING

    from reliability_app.reports.picture_file import PictureRefused
    from reliability_app.reports.picture_request import PictureWanted

    try:
        wanted = PictureWanted(options.page, options.out, options.size, options.dpi)
        answer = _answer(options, with_curves=True)
        wanted.draw(answer)
    except (RequestRefused, PictureRefused) as refusal:
        print(f"rigpaper picture: {refusal}", file=sys.stderr)
        return WRONG_USAGE
    except RigpaperError as trouble:
        print(f"rigpaper picture: {trouble}", file=sys.stderr)
        return NO_READING
    for sentence in answer.remarks:
        print(f"rigpaper picture: {sentence}", file=sys.stderr)
    return DONE


def _open(options: argparse.Namespace) -> int:
    reason = display_reason()
    if reason is None:
        from reliability_app.application import run_window

        return run_window(options.file)
    print(reason, file=sys.stderr)
    if options.file is None:
        print("Readings need no window: rigpaper read FILE", file=sys.stderr)
        return NO_READING
    return _read(_read_parser().parse_args([str(options.file)]))


def _let_streams_write_anything() -> None:
    """Let a terminal that cannot show a character show a substitute instead of failing."""
    for stream in (sys.stdout, sys.stderr):
        if hasattr(stream, "reconfigure"):
            stream.reconfigure(errors="replace")
