"""Whatever a session file holds, opening it gives a session or a sentence with file, place and reason."""

import json
import random
import time
import tracemalloc
import zlib
from base64 import b64encode
from pathlib import Path

import pytest

from reliability_app.session.json_file import load
from reliability_app.session.json_format import from_text, to_text
from reliability_app.session.json_write import one_line
from reliability_app.session.session_errors import SessionUnreadable
from reliability_app.session.shipped import shipped

SAMPLE = (Path(__file__).parents[1] / "session" / "old_versions" / "version_1.json").read_text(encoding="utf-8")


def _visited() -> str:
    """The sample of eight visits, cut to two of them."""
    session = load(shipped("sample_sets") / "fans_eight_visits.json")
    del session.visits[2:], session.sets[1:]
    return to_text(session)


VISITED = _visited()


def file_with(*, units="[]", sets=None, basis="{}", readings="[]", more=""):
    sets = sets or f'[{{"name": "A", "units": {units}, "basis": {basis}}}]'
    return f'{{"format": "rigpaper-session", "version": 1,\n"sets": {sets},\n"readings": {readings}{more}}}'


def unit_with(cell):
    return file_with(units=f'[{{"unit": "P-01", "life": 1}},\n{{"unit": "P-02", {cell}}}]')


_SET = '"confidence": 0.9, "set_at": "2026-03-02T14:00:00Z"'


def visit_with(content):
    return file_with(more=f', "visits": [{{"at": "2026-03-02T14:00:00Z", "sets": [{{"name": "A", {content}}}]}}]')


REFUSED = {
    "empty": ("", "it is empty", ""),
    "blank": (" \n\t ", "it is empty", ""),
    "truncated": (SAMPLE[: SAMPLE.index('"until"')], "the file breaks off in the middle", "line 17"),
    "one brace": ("{", "the file breaks off in the middle", "line 1"),
    "binary": ("\x00\x01PK\x03\x04\x80", r"the JSON is malformed (invalid character: '\x00", "line 1"),
    "a table": ("unit,life,state\nP-01,812,failed\n", "the JSON is malformed (invalid character: 'unit,", "line 1"),
    "foreign object": ('{"type": "FeatureCollection"}', "it is JSON, but not a Rigpaper session", ""),
    "foreign list": ("[1, 2]", "it is JSON, but not a Rigpaper session", ""),
    "foreign number": ("5", "it is JSON, but not a Rigpaper session", ""),
    "two values": (file_with() + "{}", "the JSON is malformed (trailing characters", "line 3"),
    "no version": ('{"format": "rigpaper-session"}', "its version should be a whole number", "$.version"),
    "no sets": ('{"format": "rigpaper-session", "version": 1}', 'the key "sets" is missing', "$"),
    "sets no list": (file_with(sets="{}"), "a list in brackets should stand here, not an object in braces", "$.sets"),
    "set no object": (file_with(sets="[5]"), "an object in braces should stand here, not a whole number", "$.sets[0]"),
    "no name": (file_with(sets='[{"units": []}]'), 'the key "name" is missing', "$.sets[0]"),
    "unit no object": (file_with(units="[[]]"), "not a list in brackets", "$.sets[0].units[0]"),
    "unit a number": (
        unit_with('"unit": 5').replace('"P-02", "unit": ', ""),
        "text in quotes should",
        "$.sets[0].units[1].unit",
    ),
    "life true": (
        unit_with('"life": true'),
        "a number or text in quotes should stand here, not true or false",
        "$.sets[0].units[1].life",
    ),
    "life null": (unit_with('"life": null'), "not null", "$.sets[0].units[1].life"),
    "life a list": (unit_with('"life": [812]'), "not a list in brackets", "$.sets[0].units[1].life"),
    "state a number": (
        unit_with('"state": 1'),
        "text in quotes should stand here, not a whole number",
        "$.sets[0].units[1].state",
    ),
    "huge": (unit_with('"life": 1e999'), "number out of range", "$.sets[0].units[1].life"),
    "visit without a day": (file_with(more=', "visits": [{}]'), 'the key "at" is missing', "$.visits[0]"),
    "huge in a visit": (
        visit_with('"log_likelihood": -1e999'),
        "number out of range",
        "$.visits[0].sets[0].log_likelihood",
    ),
    "NaN in a visit": (visit_with('"covariance": [[NaN]]'), "the JSON is malformed", "line 3"),
    "key twice in a visit": (visit_with('"seed": 1, "seed": 2'), "stands twice here", "$.visits[0].sets[0].seed"),
    "visit with too many cells": (
        visit_with('"units": {"columns": ' + json.dumps([f"c{i}" for i in range(3001)]) + ', "rows": []}'),
        "its 3,001 columns are more than this program can hold",
        "$.visits[0].sets[0].units.columns",
    ),
    "more cells than columns": (
        visit_with('"units": {"columns": ["unit"], "rows": ["A", "B\\t1"]}'),
        "row 2 has more cells than the 1 columns that are named",
        "$.visits[0].sets[0].units.rows[1]",
    ),
    "requirement of a mean": (
        file_with(more=', "requirement": {"ask": "mean_life"}'),
        "not one that",
        "$.requirement.ask",
    ),
    "reliability of 2 required": (
        file_with(more=f', "requirement": {{"ask": "reliability", "age": 1, "at_least": 2, {_SET}}}'),
        "a number < 1.0 should",
        "$.requirement.at_least",
    ),
    "log no list": (file_with(more=', "requirement_log": {}'), "a list in brackets should", "$.requirement_log"),
    "many digits": (unit_with('"life": ' + "9" * 5000), "number out of range", "$.sets[0].units[1].life"),
    "NaN": (unit_with('"life": NaN'), "the JSON is malformed (invalid character: 'NaN}", "line 3"),
    "Infinity": (unit_with('"life": -Infinity'), "the JSON is malformed (invalid", "line 3"),
    "leading zero": (unit_with('"life": 0812'), "the JSON is malformed (invalid number", "line 3"),
    "single quotes": (unit_with("'life': 1"), "the JSON is malformed", "line 3"),
    "a comment": (unit_with('"life": 1} // ok'), "the JSON is malformed", "line 3"),
    "trailing comma": (unit_with('"life": 1,'), "the JSON is malformed (trailing comma in object", "line 3"),
    "bare newline in text": (unit_with('"note": "a\nb"'), "the JSON is malformed", "line 3"),
    "half a character": (
        unit_with(r'"note": "\ud800"'),
        "the JSON is malformed (unexpected end of hex escape",
        "line 3",
    ),
    "key twice in a unit": (
        unit_with('"life": 1, "life": 2'),
        'the key "life" stands twice here',
        "$.sets[0].units[1].life",
    ),
    "key twice on top": (file_with(more=', "readings": []'), 'the key "readings" stands twice', "$.readings"),
    "key twice in unknown": (file_with(more=', "x": [{"a": 1, "a": 1}]'), 'the key "a" stands twice', "$.x[0].a"),
    "deep lists": (file_with(more=', "x": ' + "[" * 100_000), "nested deeper than 64 levels", ""),
    "deep objects": (file_with(more=', "x": ' + '{"a":' * 100_000), "nested deeper than 64 levels", ""),
    "deep and whole": (file_with(more=', "x": ' + "[" * 70 + "]" * 70), "nested deeper than 64 levels", ""),
    "deep in a unit": (unit_with('"x": ' + "[" * 500 + "]" * 500), "nested deeper than 64 levels", ""),
    "deep keys twice": (
        file_with(more=', "x": ' + '{"a":' * 300 + '{"b":1,"b":2}' + "}" * 300),
        'the key "b" stands twice',
        "$.x.a",
    ),
    "unknown reading": (file_with(readings='[{"ask": "mean"}]'), "the value 'mean' is not one", "$.readings[0].ask"),
    "reading without ask": (file_with(readings='[{"percent": 10}]'), 'the key "ask" is missing', "$.readings[0]"),
    "reading without percent": (
        file_with(readings='[{"ask": "life"}]'),
        'the key "percent" is missing',
        "$.readings[0]",
    ),
    "percent 0": (
        file_with(readings='[{"ask": "life", "percent": 0}]'),
        "a number > 0.0 should",
        "$.readings[0].percent",
    ),
    "percent 100": (
        file_with(readings='[{"ask": "life", "percent": 100}]'),
        "a number < 100.0 should",
        "$.readings[0].percent",
    ),
    "negative age": (file_with(readings='[{"ask": "hazard", "age": -1}]'), "a number > 0.0", "$.readings[0].age"),
    "confidence 95": (file_with(basis='{"confidence": 95}'), "a number < 1.0", "$.sets[0].basis.confidence"),
    "side": (file_with(basis='{"side": "both"}'), "the value 'both' is not one", "$.sets[0].basis.side"),
    "family a number": (file_with(basis='{"family": 5}'), "text in quotes", "$.sets[0].basis.family"),
    "colour": (file_with(sets='[{"name": "A", "colour": -1}]'), "a whole number >= 0", "$.sets[0].colour"),
    "colour a text": (file_with(sets='[{"name": "A", "colour": "red"}]'), "a whole number should", "$.sets[0].colour"),
    "visits no objects": (file_with(more=', "visits": [5]'), "an object in braces should", "$.visits[0]"),
    "title a number": (file_with(more=', "title": 5'), "text in quotes should", "$.title"),
    "long key twice": (file_with(more=f', "{"k" * 10_000}": 1, "{"k" * 10_000}": 2'), "the key ", "$.kkkk"),
    "too many columns": (
        file_with(units="[{" + ", ".join(f'"c{i}": 1' for i in range(20_000)) + "}]"),
        "its table of 1 rows and 20,000 further columns is larger than this program can hold",
        "$.sets[0]",
    ),
    "too many cells": (
        file_with(
            sets='[{"name": "A", "extra_columns": '
            + json.dumps([f"c{i}" for i in range(2000)])
            + ', "units": [{}'
            + ", {}" * 30_000
            + "]}]"
        ),
        "its table of 30,001 rows and 2,000 further columns is larger",
        "$.sets[0]",
    ),
    "column named twice": (
        file_with(sets='[{"name": "A", "extra_columns": ["x", "X"]}]'),
        "a column 'X' already",
        "$.sets[0]",
    ),
    "column without a name": (unit_with('"": 5'), "The column has no name", "$.sets[0]"),
    "column like a built-in one": (unit_with('"Life": 5'), "a column 'Life' already", "$.sets[0]"),
}


@pytest.mark.parametrize(("text", "reason", "place"), REFUSED.values(), ids=REFUSED.keys())
def test_what_is_no_session_is_refused_with_file_place_and_reason(tmp_path, text, reason, place):
    path = tmp_path / "rig.json"
    path.write_text(text, encoding="utf-8", newline="")
    before = path.read_bytes(), path.stat().st_mtime_ns

    with pytest.raises(SessionUnreadable) as refusal:
        load(path)

    assert reason in str(refusal.value)
    assert refusal.value.place.startswith(place)
    assert bool(refusal.value.place) == bool(place)
    assert str(refusal.value).startswith(f"{path} cannot be opened: ")
    assert len(str(refusal.value)) < 1000
    assert (path.read_bytes(), path.stat().st_mtime_ns) == before


def test_numbers_at_the_edge_of_what_is_read_stay_as_they_are():
    text = unit_with('"life": 1.7976931348623157e308, "until": 1e-999, "entered": -0.0')
    row = from_text(text).sets[0].table.row(1)
    assert (row["life"], row["until"], row["entered"]) == ("1.7976931348623157e308", "1e-999", "-0.0")


def test_a_huge_number_under_an_unknown_key_is_kept_as_it_is():
    assert '"x": 1e999' in to_text(from_text(file_with(more=', "x": 1e999')))


def test_nesting_that_is_read_can_also_be_written():
    nested = "[" * 60 + "]" * 60
    saved = to_text(from_text(file_with(more=f', "x": {nested}')))
    assert nested in saved
    assert to_text(from_text(saved)) == saved


def mutated(text, chance):
    """Damage `text` in one to three places: characters changed, cut out, doubled, or replaced by hostile pieces."""
    pieces = ["NaN", "1e999", "null", "{", "[", "]", '"', "\\", "\\ud800", "\x00", "-", "[[[[", "true", '{"a":1}', ","]
    for _ in range(chance.randint(1, 3)):
        start = chance.randrange(len(text))
        end = min(len(text), start + chance.choice([0, 1, 1, 5, 40]))
        text = text[:start] + chance.choice(["", text[start:end] * 2, chance.choice(pieces)]) + text[end:]
    return text


def replaced(value, chance, hostile):
    """Put `hostile` in the place of a random part of the JSON content `value`."""
    if isinstance(value, dict) and value and chance.random() < 0.85:
        key = chance.choice(list(value))
        return {**value, key: replaced(value[key], chance, hostile)}
    if isinstance(value, list) and value and chance.random() < 0.85:
        index = chance.randrange(len(value))
        return [*value[:index], replaced(value[index], chance, hostile), *value[index + 1 :]]
    return hostile


def session_or_sentence(text):
    """Whether `text` opens; if it does, what it holds must survive saving."""
    try:
        session = from_text(text, source="rig.json")
    except SessionUnreadable as refusal:
        sentence = str(refusal)
    else:
        saved = to_text(session)
        assert to_text(from_text(saved)) == saved
        return True
    assert sentence.startswith("rig.json cannot be opened: ")
    return False


HOSTILE = [None, True, -1, 1e308, 10**400, "", "x", "\u0000", [], {}, [[]], {"": ""}, [None], {"a": {"a": 1}}, "\t\t"]


@pytest.mark.parametrize(("sample", "times"), [(SAMPLE, 1000), (VISITED, 300)], ids=["units", "visits"])
def test_damaged_text_gives_a_session_or_a_sentence(sample, times):
    chance = random.Random(20250131)
    opened = [session_or_sentence(mutated(sample, chance)) for _ in range(times)]
    assert 0.03 < sum(opened) / times < 0.97  # both outcomes were met


@pytest.mark.parametrize(("sample", "times"), [(SAMPLE, 1000), (VISITED, 300)], ids=["units", "visits"])
def test_wrong_content_gives_a_session_or_a_sentence(sample, times):
    chance = random.Random(20250131)
    content = json.loads(sample)
    texts = [one_line(replaced(content, chance, chance.choice(HOSTILE))) for _ in range(times)]
    opened = [session_or_sentence(text) for text in texts]
    assert 0.03 < sum(opened) / times < 0.97


def compressed(rows: bytes, kept: int | None = None) -> str:
    packed = b64encode(zlib.compress(rows)[:kept]).decode()
    return visit_with(f'"units": {{"columns": ["unit"], "packed": "{packed}"}}')


@pytest.mark.parametrize(
    ("text", "reason"),
    [
        (compressed(b"A\nB", kept=-2), "break off"),
        (visit_with('"units": {"columns": ["unit"], "packed": "no base64"}'), "damaged"),
        (visit_with('"units": {"columns": ["unit"], "packed": ""}'), "break off"),
        (compressed(b"\xff\xfe"), "damaged"),
        (compressed(b"A\tB"), "row 1 has more cells"),
        (compressed(b"\n" * 100_000_000), "more than 3,000,000"),
        (compressed(b"A" * 200_000_001), "more than 200,000,000 bytes"),
    ],
    ids=["cut", "no base64", "empty", "no text", "too many cells", "too many rows", "a bomb"],
)
def test_compressed_units_that_are_damaged_or_too_many_are_refused_quickly(text, reason):
    start = time.perf_counter()
    with pytest.raises(SessionUnreadable, match=reason) as refusal:
        from_text(text)
    assert refusal.value.place.startswith("$.visits[0]")
    assert time.perf_counter() - start < 2


@pytest.mark.parametrize(
    "make",
    [
        lambda: "\x00" * 20_000_000,
        lambda: "[" * 20_000_000,
        lambda: "[" + "1," * 10_000_000 + "1]",
        lambda: '{"a": "' + "x" * 20_000_000,
        lambda: '{"format": "rigpaper-session", "version": 1, "sets": [' + "{}," * 7_000_000,
    ],
    ids=["zeros", "brackets", "foreign list", "endless text", "endless sets"],
)
def test_a_large_file_of_junk_is_refused_quickly_and_in_little_memory(make):
    text = make()
    tracemalloc.start()
    try:
        start = time.perf_counter()
        assert not session_or_sentence(text)
        seconds = time.perf_counter() - start
        _, peak = tracemalloc.get_traced_memory()
    finally:
        tracemalloc.stop()
    assert seconds < 2
    assert peak < 5 * len(text)
