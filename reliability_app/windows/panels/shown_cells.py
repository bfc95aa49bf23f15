"""Takes the cells of a small table of the window as they are shown, to be copied."""

from __future__ import annotations

from PySide6.QtWidgets import QTableWidget, QTableWidgetItem

from reliability_app.session.tables_out import TableOut


def shown_cells(table: QTableWidget, title: str, notes: tuple[tuple[str, str], ...] = ()) -> TableOut:
    """Return headings and cells of a table; `notes` stand below."""
    columns = range(table.columnCount())
    headings = tuple(_text(table.horizontalHeaderItem(column)) for column in columns)
    rows = tuple(tuple(_text(table.item(row, column)) for column in columns) for row in range(table.rowCount()))
    return TableOut(title, headings, rows, notes)


def _text(item: QTableWidgetItem | None) -> str:
    return "" if item is None else item.text()
