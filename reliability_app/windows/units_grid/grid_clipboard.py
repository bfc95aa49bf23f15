"""Cells on the system clipboard, as tab-separated text and an HTML table, the way spreadsheets exchange them."""

from __future__ import annotations

import csv
import html
import io
import re
from collections.abc import Sequence
from dataclasses import dataclass

from PySide6.QtCore import QMimeData
from PySide6.QtGui import QGuiApplication

# Marks a block that was copied here, so that it is pasted back cell by cell and never guessed at.
OWN_FORMAT = "application/x-rigpaper-cells"

_SPECIAL = re.compile("[&<>\"']")
# Stands between cells while they are escaped together: a noncharacter that Unicode sets aside for such inner use.
_BETWEEN = "\ufdd0"

Cells = Sequence[Sequence[str]]


@dataclass(frozen=True)
class Clip:
    """What the clipboard holds: plain text, HTML if there is any, and whether the cells are a block of this program."""

    text: str
    html: str | None
    own: bool


def put_cells(cells: Cells, *, headings: Sequence[str] = ()) -> None:
    """Put cells on the clipboard, under headings if there are any."""
    mime = QMimeData()
    mime.setText(tab_separated([headings, *cells] if headings else cells))
    mime.setHtml(html_table(cells, headings=headings))
    if not headings:
        mime.setData(OWN_FORMAT, b"1")
    QGuiApplication.clipboard().setMimeData(mime)


def read_clip() -> Clip:
    """Read what the clipboard holds; empty texts where it holds nothing that can be pasted into a table."""
    mime = QGuiApplication.clipboard().mimeData()
    if mime is None:
        return Clip("", None, own=False)
    return Clip(
        text=mime.text() if mime.hasText() else "",
        html=mime.html() if mime.hasHtml() else None,
        own=mime.hasFormat(OWN_FORMAT),
    )


def tab_separated(cells: Cells) -> str:
    """Write cells as text, one row a line; a cell that holds a tab, a line break or a quote is put in quotes."""
    text = io.StringIO()
    csv.writer(text, delimiter="\t", lineterminator="\n").writerows(cells)
    return text.getvalue()


def cells_of(text: str) -> list[list[str]]:
    """Read back what `tab_separated` wrote."""
    return [row or [""] for row in csv.reader(io.StringIO(text), delimiter="\t")]


def html_table(cells: Cells, *, headings: Sequence[str] = ()) -> str:
    """Write cells as an HTML table."""
    head = f"<thead>{_html_row(headings, 'th')}</thead>" if headings else ""
    # One call over all cells of a row, not one a cell: with 100,000 rows that is the half of copying.
    body = "".join(f"<tr><td>{_escaped(_BETWEEN.join(row)).replace(_BETWEEN, '</td><td>')}</td></tr>" for row in cells)
    return f'<meta charset="utf-8"><table>{head}<tbody>{body}</tbody></table>'


def _escaped(text: str) -> str:
    return html.escape(text) if _SPECIAL.search(text) else text


def _html_row(row: Sequence[str], tag: str) -> str:
    return "<tr>" + "".join(f"<{tag}>{html.escape(text)}</{tag}>" for text in row) + "</tr>"
