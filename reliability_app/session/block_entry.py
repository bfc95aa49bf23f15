"""Plans the writing of a block of cells: canonical texts, and what an entry like "1500+" adds beside it."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from itertools import zip_longest

from reliability_app.session.numbers import are_plain, asked_among, is_plain
from reliability_app.session.row_reading import NUMBER_COLUMNS, canonical_cell, life_entry_of_row
from reliability_app.session.table_changes import BlockChange
from reliability_app.session.text_columns import TextColumns

_LIFE_COLUMNS = ("life", "until", "state")


def plan_block(texts: TextColumns, row: int, *, typed: Mapping[str, Sequence[str]]) -> BlockChange:
    """Return the change that writes `typed`, given column by column, from `row` on; see `UnitTable.set_block`."""
    after = {column: _canonical_texts(column, cells) for column, cells in typed.items()}
    if after.keys() == {"life"} and len(after["life"]) == 1:
        _ask_about_point(texts, row, after["life"])
    _drop_empty_rows_at_end(after, keep=max(texts.row_count - row, 0))
    if not after.keys().isdisjoint(_LIFE_COLUMNS) and not are_plain(after.get("life", ["?"])):
        _fill_in_life_entries(texts, row, after)
    count = len(next(iter(after.values()), ()))
    before = {column: _padded(texts, row, column=column, count=count) for column in after}
    row_count = max(texts.row_count, row + count) if count else texts.row_count
    return BlockChange(row, before, after, texts.row_count, row_count)


def _ask_about_point(texts: TextColumns, row: int, typed: list[str]) -> None:
    """Have a life like "1.250", typed in place of another, asked about where its column says thousands, in place."""
    lives = texts.column("life")
    if lives[row : row + 1] != typed:
        typed[0] = asked_among(typed[0], (life for place, life in enumerate(lives) if place != row))


def by_column(cells: Sequence[Sequence[str]], columns: Sequence[str]) -> dict[str, Sequence[str]]:
    """Turn rows of cells into `columns`, filling short rows up with empty cells.

    Raises
    ------
    ValueError
        For a row with more cells than there are columns, or a column named twice.
    """
    longest = max(map(len, cells), default=0)
    if longest > len(columns) or len(set(columns)) != len(columns):
        raise ValueError(f"Rows of {longest} cells cannot be written to the columns {', '.join(columns)}.")
    texts: list[Sequence[str]] = list(zip_longest(*cells, fillvalue=""))
    texts += [[""] * len(cells) for _ in range(len(columns) - longest)]
    return dict(zip(columns, texts, strict=True))


def _canonical_texts(column: str, cells: Sequence[str]) -> list[str]:
    texts = [text.strip() for text in cells]
    if column == "state":
        stored = {text: canonical_cell(column, text) for text in set(texts)}
        return [stored[text] for text in texts]
    if column in NUMBER_COLUMNS and not are_plain(texts):
        return [text if not text or is_plain(text) else canonical_cell(column, text) for text in texts]
    return texts


def _drop_empty_rows_at_end(after: dict[str, list[str]], *, keep: int) -> None:
    """Shorten the block by its last rows that hold no text and lie below the table's first `keep` rows."""
    count = len(next(iter(after.values()), ()))
    while count > keep and not any(column[count - 1] for column in after.values()):
        count -= 1
    for column in after.values():
        del column[count:]


def _fill_in_life_entries(texts: TextColumns, row: int, after: dict[str, list[str]]) -> None:
    """Spread lives like "1500+" and "200-400" over Life, Until and State where the row's cells agree."""
    count = len(next(iter(after.values())))
    whole = {column: after.get(column) or _padded(texts, row, column=column, count=count) for column in _LIFE_COLUMNS}
    for place, life in enumerate(whole["life"]):
        if not life or is_plain(life):
            continue
        entry = life_entry_of_row(life, whole["until"][place], whole["state"][place])
        if entry is not None:
            after.update(whole)
            whole["life"][place], whole["until"][place], whole["state"][place] = (
                entry.life,
                entry.until,
                entry.state,
            )


def _padded(texts: TextColumns, row: int, *, column: str, count: int) -> list[str]:
    """Return the texts of `count` cells from `row` on, empty ones where the table ends before."""
    there = texts.column(column)[row : row + count]
    return there + [""] * (count - len(there))
