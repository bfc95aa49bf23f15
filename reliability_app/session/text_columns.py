"""The bare texts of a table, column by column, with the primitive changes that every edit is made of."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence


class TextColumns:
    """Lists of texts, one list per column, all of one length.

    Attributes
    ----------
    row_count : int
    names : tuple of str
        The columns from left to right.
    """

    def __init__(self, names: Iterable[str]) -> None:
        self.row_count = 0
        self._lists: dict[str, list[str]] = {name: [] for name in names}

    @property
    def names(self) -> tuple[str, ...]:
        """The columns from left to right."""
        return tuple(self._lists)

    def column(self, name: str) -> list[str]:
        """Return the live list of a column: for reading only."""
        return self._lists[name]

    def copy(self) -> TextColumns:
        """Return an independent copy; texts are shared, so it costs one pointer a cell."""
        twin = TextColumns(())
        twin.row_count = self.row_count
        twin._lists = {name: texts.copy() for name, texts in self._lists.items()}
        return twin

    def write(self, row: int, texts: Mapping[str, Sequence[str]]) -> None:
        """Overwrite, in each named column, the cells from `row` on; the rows must exist."""
        for name, cells in texts.items():
            self._lists[name][row : row + len(cells)] = cells

    def set_row_count(self, count: int) -> None:
        """Cut rows off the end, or add empty ones there."""
        for texts in self._lists.values():
            del texts[count:]
            texts.extend([""] * (count - len(texts)))
        self.row_count = count

    def insert_empty(self, row: int, count: int) -> None:
        """Insert empty rows before `row`."""
        for texts in self._lists.values():
            texts[row:row] = [""] * count
        self.row_count += count

    def take_out(self, rows: Sequence[int]) -> dict[str, list[str]]:
        """Remove `rows` (ascending) and return their texts by column, columns without any text left out."""
        gone = set(rows)
        taken = {}
        for name, texts in self._lists.items():
            cells = [texts[row] for row in rows]
            if any(cells):
                taken[name] = cells
            self._lists[name] = [text for row, text in enumerate(texts) if row not in gone]
        self.row_count -= len(rows)
        return taken

    def put_back(self, rows: Sequence[int], taken: Mapping[str, Sequence[str]]) -> None:
        """Undo `take_out`: afterwards `rows` hold these texts again."""
        count = self.row_count + len(rows)
        back = set(rows)
        kept = [row for row in range(count) if row not in back]
        for name, texts in self._lists.items():
            whole = [""] * count
            for row, text in zip(kept, texts, strict=True):
                whole[row] = text
            for row, text in zip(rows, taken.get(name, ()), strict=False):
                whole[row] = text
            self._lists[name] = whole
        self.row_count = count

    def permute(self, order: Sequence[int]) -> None:
        """Put row `order[i]` in place i."""
        for name, texts in self._lists.items():
            self._lists[name] = [texts[row] for row in order]

    def add_column(self, name: str, position: int, cells: Sequence[str] = ()) -> None:
        """Add a column so that it becomes number `position`; without `cells` it is empty."""
        lists = list(self._lists.items())
        lists.insert(position, (name, list(cells) or [""] * self.row_count))
        self._lists = dict(lists)

    def remove_column(self, name: str) -> None:
        """Remove a column and its cells."""
        del self._lists[name]

    def rename_column(self, name: str, new: str) -> None:
        """Give a column another name in the same place."""
        self._lists = {new if known == name else known: texts for known, texts in self._lists.items()}
