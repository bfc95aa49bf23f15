"""Puts a table on the clipboard as tab-separated text for spreadsheets and as HTML for documents."""

from __future__ import annotations

from PySide6.QtCore import QMimeData
from PySide6.QtGui import QGuiApplication

from reliability_app.session.tables_out import TableOut, as_html, as_tab_separated


def copy_table(table: TableOut) -> None:
    """Copy a table with what stands below it."""
    mime = QMimeData()
    mime.setText(as_tab_separated(table))
    mime.setHtml(as_html(table))
    QGuiApplication.clipboard().setMimeData(mime)
