"""Opens 20,000 hostile session files and understands 20,000 hostile pastes; run by hand, not collected.

    nice python -m tests.benchmarks.hostile_study [HOW_MANY]

Each gives a session or a sentence; the slowest and the memory at its highest are printed. Result of 2026-12-01, 2 cores
under the load of others:

    20000 hostile files: 4017 read, 15983 told why not; slowest 0.04 s; 282 MB
    20000 hostile pastes: 2594 read, 17406 told why not; slowest 0.15 s; 282 MB
    100 MB of junk: refused in 0.15 to 0.73 s; 420 MB
"""

import json
import random
import resource
import sys
import time
from collections.abc import Callable

from reliability_app.session.json_write import one_line
from reliability_app.session.pasted_text import understand
from reliability_app.session.unit_table import UnitTable
from tests.robustness.test_hostile_session_files import (
    HOSTILE,
    SAMPLE,
    VISITED,
    mutated,
    replaced,
    session_or_sentence,
)

SEED = 20_261_201
CELLS = (
    *("812", "53,2", "1.401,40", "1,234", "-5", "0", "NaN", "inf", "1e999", "1_000", "١٢", "1500+", ">1500", "<200"),
    *("200-400", "400-200", "failed", "ok", "yes", "n/a", "", "+", "=1+1", "@x", "Life (h)", "State", "Unit", "Qty"),
    *(
        "2025-04-03",
        "03/04/2025",
        "13.4.25",
        "#DIV/0!",
        "still running",
        "\0",
        '"',
        "\\",
        "\ud800",
        "x" * 500,
        "9" * 400,
    ),
)
SEPARATORS = ("\t", ",", ";", "|", " ", "  ", "\n", "\r\n", "\r", '"', "'", "\u00a0", "\u2028", "\x0b")
JUNK = {
    "zeros": lambda: "\x00" * 100_000_000,
    "brackets": lambda: "[" * 100_000_000,
    "endless text": lambda: '{"a": "' + "x" * 100_000_000,
    "endless sets": lambda: '{"format": "rigpaper-session", "version": 1, "sets": [' + "{}," * 33_000_000,
}


def hostile_file(chance: random.Random) -> str:
    """A session file damaged in its text or in its content."""
    sample = chance.choice((SAMPLE, VISITED))
    if chance.random() < 0.5:
        return mutated(sample, chance)
    return one_line(replaced(json.loads(sample), chance, chance.choice(HOSTILE)))


def hostile_paste(chance: random.Random) -> str:
    """Cells and separators without sense, and now and then half a table."""
    if chance.random() < 0.3:
        separator = chance.choice(SEPARATORS)
        rows = (separator.join(chance.choices(CELLS, k=4)) for _ in range(chance.randrange(30)))
        return "\n".join(rows)
    return "".join(chance.choice(CELLS) + chance.choice(SEPARATORS) for _ in range(chance.randrange(80)))


def understood(text: str) -> bool:
    """Whether any row of a paste can be read; what was understood must hold together."""
    found = understand(text)
    table = UnitTable.from_rows(found.rows, found.extra_columns)
    assert table.counts().unread == found.faulty
    assert found.sentence.endswith(".")
    return bool(table.read_units().rows)


def run(what: str, how_many: int, make: Callable[[random.Random], str], act: Callable[[str], bool]) -> None:
    """Print how many were read, the slowest, and the memory at its highest."""
    chance = random.Random(SEED)
    slowest, read = 0.0, 0
    for _ in range(how_many):
        text = make(chance)
        start = time.perf_counter()
        read += act(text)
        slowest = max(slowest, time.perf_counter() - start)
    memory = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024
    told = f"{read} read, {how_many - read} told why not"
    print(f"{how_many} hostile {what}: {told}; slowest {slowest:.2f} s; {memory:.0f} MB")


def main(how_many: int) -> None:
    """Run files, pastes and junk of 100 MB."""
    run("files", how_many, hostile_file, session_or_sentence)
    run("pastes", how_many, hostile_paste, understood)
    for name, make in JUNK.items():
        text = make()
        start = time.perf_counter()
        assert not session_or_sentence(text)
        memory = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024
        print(f"100 MB of {name}: refused in {time.perf_counter() - start:.2f} s; {memory:.0f} MB")


if __name__ == "__main__":
    main(int(sys.argv[1]) if len(sys.argv) > 1 else 20_000)
