"""Times saving and opening 100,000 units without and with visits that record as many; run by hand, not collected.

    python -m tests.benchmarks.bench_session_file

To be held: a save within 1 s, an opening within 1.5 s. Result of 2026-12-01, 2 cores under the load of others; thirty
visits of 100,000 units are more than is promised:

    0 visits: 6.7 MB, saved in 0.54 s, opened in 0.43 s
    1 visits: 7.4 MB, saved in 0.58 s, opened in 0.55 s, compared with the last visit in 0.26 s
    8 visits: 12.5 MB, saved in 0.61 s, opened in 0.96 s, compared with the last visit in 0.27 s
    29 visits: 27.8 MB, saved in 0.99 s, opened in 2.37 s, compared with the last visit in 0.28 s
"""

import tempfile
import time
from datetime import UTC, datetime, timedelta
from itertools import pairwise
from pathlib import Path

from reliability_app.session.document import Session, UnitSet
from reliability_app.session.json_file import load_and_note, save
from reliability_app.session.packed_units import packed
from reliability_app.session.unit_table import UnitTable
from reliability_app.session.visit import Visit
from reliability_app.session.visits import differs_from_last

UNITS = 100_000


def table(age: int) -> UnitTable:
    """Units of many different lives, the running ones `age` older."""
    rows = (
        {
            "unit": f"P-{unit:06d}",
            "life": f"{unit * 7919 % 5000 + 1 + age}.50",
            "state": "running" if unit % 7 else "failed",
        }
        for unit in range(UNITS)
    )
    return UnitTable.from_rows(rows)


def visited(visits: int) -> Session:
    """A session of so many visits of the whole set."""
    start = datetime(2026, 1, 1, tzinfo=UTC)
    recorded = [
        Visit.of(
            {
                "at": (start + timedelta(weeks=number)).isoformat(),
                "label": f"week {number}",
                "sets": [{"name": "A", "units": packed(table(100 * number))}],
            }
        )
        for number in range(visits)
    ]
    return Session(sets=[UnitSet("A", table(100 * visits))], visits=recorded)


def main() -> None:
    """Print size and times for none, 1, 8 and 29 visits."""
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "rig.json"
        for visits in (0, 1, 8, 29):
            session = visited(visits)
            times = [time.perf_counter()]
            save(session, path)
            times.append(time.perf_counter())
            load_and_note(path)
            times.append(time.perf_counter())
            differs_from_last(session)
            times.append(time.perf_counter())
            saved, opened, compared = (after - before for before, after in pairwise(times))
            size = f"{path.stat().st_size / 1e6:.1f} MB"
            told = f"saved in {saved:.2f} s, opened in {opened:.2f} s, compared with the last visit in {compared:.2f} s"
            print(f"{visits} visits: {size}, {told}")


if __name__ == "__main__":
    main()
