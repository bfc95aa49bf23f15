"""Tables opened from files."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pytest

from reliability_app.engine.errors import RigpaperError
from reliability_app.session.table_files import LARGEST, TableUnreadable, read_table

TABLE = "Unit;Life (h);State\nPrüfling 1;812,5;läuft\nPrüfling 2;53,2;ausgefallen\n"
ROWS = [
    {"unit": "Prüfling 1", "life": "812.5", "state": "running"},
    {"unit": "Prüfling 2", "life": "53.2", "state": "failed"},
]


@pytest.mark.parametrize("encoding", ["utf-8", "utf-8-sig", "utf-16"])
@pytest.mark.parametrize("name", ["rig.csv", "rig.TXT", "rig.dat", "rig"])
def test_text_table_is_read_in_its_encoding(tmp_path: Path, encoding: str, name: str) -> None:
    path = tmp_path / name
    path.write_bytes(TABLE.encode(encoding))
    understood = read_table(path)
    assert understood.rows == ROWS
    assert understood.life_unit == "h"
    assert not any("1252" in note for note in understood.notes)


def test_older_encoding_is_guessed_and_said(tmp_path: Path) -> None:
    path = tmp_path / "rig.csv"
    path.write_bytes(TABLE.encode("cp1252"))
    understood = read_table(str(path))
    assert understood.rows == ROWS
    assert any("read as Windows-1252" in note for note in understood.notes)


def test_tsv_is_read_and_left_untouched(tmp_path: Path) -> None:
    path = tmp_path / "rig.tsv"
    path.write_bytes(TABLE.replace(";", "\t").encode())
    before = path.stat().st_mtime_ns, path.read_bytes()
    assert read_table(path).rows == ROWS
    assert (path.stat().st_mtime_ns, path.read_bytes()) == before


@pytest.mark.parametrize(
    ("name", "data", "says"),
    [
        ("rig.json", b"[1, 2]", "no session"),
        ("rig.csv", b"\x00\x01\x02\xff", "is not text"),
        ("rig.csv", b"\xff\xfeA", "breaks off"),
        ("rig.csv", b"", "is empty"),
        ("rig.csv", b"Unit,Life,State\n", "holds no rows"),
    ],
)
def test_what_is_no_table_is_refused_with_a_sentence(tmp_path: Path, name: str, data: bytes, says: str) -> None:
    path = tmp_path / name
    path.write_bytes(data)
    with pytest.raises(TableUnreadable, match=says) as refused:
        read_table(path)
    assert str(path) in str(refused.value)
    assert str(refused.value).endswith(".")
    assert issubclass(TableUnreadable, RigpaperError)


def test_missing_file_folder_and_odd_name_are_refused_with_a_sentence(tmp_path: Path) -> None:
    with pytest.raises(TableUnreadable, match="There is no file"):
        read_table(tmp_path / "none.csv")
    with pytest.raises(TableUnreadable, match="is a folder: choose a file in it"):
        read_table(tmp_path)
    with pytest.raises(TableUnreadable, match="cannot be read"):
        read_table("bad\0name.csv")


def test_file_without_permission_is_refused_with_a_sentence(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = tmp_path / "rig.csv"
    path.write_text(TABLE, encoding="utf-8")

    def refuse(_: Path) -> bytes:
        raise PermissionError(13, "Permission denied")

    # Taken away this way, since the administrator, as whom tests may run, may read any file.
    monkeypatch.setattr(Path, "read_bytes", refuse)
    with pytest.raises(TableUnreadable, match=r"cannot be read \(Permission denied\): check that you may open it"):
        read_table(path)


def test_huge_file_is_refused_before_it_is_read(tmp_path: Path) -> None:
    path = tmp_path / "rig.csv"
    with path.open("wb") as file:
        file.truncate(LARGEST + 1)
    with pytest.raises(TableUnreadable, match="larger than 200 MB: split"):
        read_table(path)


def test_reading_a_table_or_a_paste_imports_neither_pandas_nor_qt(tmp_path: Path) -> None:
    path = tmp_path / "rig.csv"
    path.write_text(TABLE, encoding="utf-8")
    program = (
        "import sys\n"
        "from reliability_app.session.table_files import read_table\n"
        "from reliability_app.session.unit_table import UnitTable\n"
        "understood = read_table(sys.argv[1])\n"
        "data = UnitTable.from_rows(understood.rows).life_data()\n"
        "heavy = {'pandas', 'PySide6', 'pyqtgraph', 'scipy.stats', 'openpyxl', 'python_calamine', 'html.parser'}\n"
        "print(data.unit_count, sorted(heavy.intersection(sys.modules)))\n"
    )
    run = subprocess.run([sys.executable, "-c", program, str(path)], capture_output=True, text=True, check=True)
    assert run.stdout.strip() == "2 []"
