"""Run as a program: forks children that save over and over, kills each at a random instant, looks at what is left."""

import os
import random
import signal
import sys
import time
from pathlib import Path

from reliability_app.session.document import Session, UnitSet
from reliability_app.session.json_file import backup_of, load, save
from reliability_app.session.packed_units import packed
from reliability_app.session.unit_table import UnitTable
from reliability_app.session.visit import Visit, unit_sets_of

UNITS = 2000


def session_number(number: int) -> Session:
    """A session all of whose units, today and at a visit, carry `number`: a mixture of two states would show."""
    rows = [{"unit": f"P-{unit:05d}", "life": f"{number}.50", "state": "failed"} for unit in range(UNITS)]
    table = UnitTable.from_rows(rows)
    recorded = {"name": "A", "units": packed(table)}
    visit = Visit.of({"at": "2026-03-02T14:00:00+01:00", "label": str(number), "sets": [recorded]})
    return Session(title=str(number), sets=[UnitSet("A", table)], visits=[visit])


def save_for_ever(sessions: list[Session], path: Path) -> None:
    """Save one session after the other, until the parent kills this process."""
    while True:
        for session in sessions:
            save(session, path)


def whole(path: Path) -> str:
    """Open the session at `path` and give its number, having seen that all of it belongs to one state."""
    session = load(path)
    then = unit_sets_of(session.visits[0])[0].table
    for table in (session.sets[0].table, then):
        assert table.row_count == UNITS
        assert {table.text(row, "life") for row in range(UNITS)} == {f"{session.title}.50"}
    assert session.visits[0].label == session.title
    return session.title


def main(path: Path, kills: int) -> None:
    """Print what was found after each kill: the numbers in the file and in its backup, and half-written files."""
    chance = random.Random(20250131)
    sessions = [session_number(number) for number in (1, 2, 3)]
    for session in sessions:
        save(session, path)
    for _ in range(kills):
        first = chance.randrange(len(sessions))
        child = os.fork()
        if child == 0:
            save_for_ever([*sessions[first:], *sessions[:first]], path)
        time.sleep(chance.uniform(0.005, 0.08))
        os.kill(child, signal.SIGKILL)
        _, status = os.waitpid(child, 0)
        assert os.WTERMSIG(status) == signal.SIGKILL
        half_files = list(path.parent.glob(".*.rigpaper-saving"))
        print(whole(path), whole(backup_of(path)), len(half_files))
        for half_file in half_files:
            half_file.unlink()


if __name__ == "__main__":
    main(Path(sys.argv[1]), int(sys.argv[2]))
