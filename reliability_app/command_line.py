"""The command `rigpaper`: opens the window, or reads a file without one.

rigpaper                 open the window, empty
rigpaper FILE            open a session or a table; on a machine without a screen, print its readings
rigpaper read FILE ...   print the readings of a file
"""

from __future__ import annotations

import argparse
import sys
from collections.abc import Sequence
from pathlib import Path

from reliability_app import __version__
from reliability_app.system_libraries import display_reason

DONE, NO_READING, WRONG_USAGE = 0, 1, 2


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command and return its exit status: 0 done, 1 no reading or no window, 2 wrong usage."""
    words = list(sys.argv[1:] if arguments is None else arguments)
    _let_streams_write_anything()
    try:
        if words[:1] == ["read"]:
            return _read(_read_parser().parse_args(words[1:]))
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
    parser.add_argument("file", nargs="?", type=Path, metavar="FILE", help="a session (.json) or a table (.csv, .tsv)")
    parser.add_argument("--version", action="version", version=f"Rigpaper {__version__}")
    return parser


def _read_parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="rigpaper read",
        description="Print the readings of a session or a table, with their bounds and cautions.",
    )
    parser.add_argument("file", type=Path, metavar="FILE", help="a session (.json) or a table (.csv, .tsv)")
    parser.add_argument("--family", help="family of life distributions, such as lognormal or weibull")
    parser.add_argument("--percent", nargs="+", type=float, metavar="P", help="read the life at P %% failed")
    parser.add_argument("--age", nargs="+", type=float, metavar="T", help="read the reliability at age T")
    parser.add_argument("--confidence", type=float, metavar="C", help="confidence of each bound, such as 0.95")
    parser.add_argument("--side", help="lower, upper or two")
    parser.add_argument("--bound", help="kind of bound: likelihood, wald or exact")
    parser.add_argument("--set", dest="set_name", metavar="NAME", help="read only the set of this name")
    parser.add_argument("--json", action="store_true", help="print one JSON object")
    return parser


def _read(options: argparse.Namespace) -> int:
    from reliability_app.engine.errors import RigpaperError
    from reliability_app.session.reading_request import RequestRefused, read_request

    try:
        answer = read_request(
            options.file,
            family=options.family,
            percents=options.percent or (),
            ages=options.age or (),
            confidence=options.confidence,
            side=options.side,
            bound=options.bound,
            set_name=options.set_name,
        )
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
