"""Which term of the help belongs to what has the focus or lies under the mouse."""

from __future__ import annotations

from collections.abc import Iterable

from PySide6.QtWidgets import QComboBox, QWidget

from reliability_app.session.document import ASK_NAMES, Ask
from reliability_app.windows.help_cautions import CAUTIONS
from reliability_app.windows.help_methods import BOUNDS, FITTING
from reliability_app.windows.help_texts import PAGES, READINGS, RECORDS, Term

TERMS = tuple(
    sorted((*RECORDS, *READINGS, *BOUNDS, *FITTING, *PAGES, *CAUTIONS), key=lambda term: term.title.casefold())
)
"""All terms, by title."""

_BY_KEY = {term.key: term for term in TERMS}

# A widget that says so by this property is explained by the term of that key.
HELP_PROPERTY = "help_term"

_BY_NAME = {
    "set": "set",
    "sets": "set",
    "unit of the lives": "life",
    "units": "unit",
    "family": "family",
    "with threshold": "threshold",
    "fit method": "fit method",
    "shape": "held shape",
    "shape held": "held shape",
    "bound": "automatic bound",
    "confidence": "confidence",
    "confidence in percent": "confidence",
    "side": "one-sided bound",
    "basis": "basis",
    "cautions": "caution",
    "readings": "b-life",
    "another reading": "b-life",
    "reading sentence": "b-life",
    "what the reading rests on": "basis",
    "fitted parameters": "maximum likelihood",
    "paper": "probability paper",
    "hazard": "hazard",
    "survival": "reliability",
    "density": "density",
    "cumulative hazard": "cumulative hazard",
    "likelihood": "likelihood region",
    "candidates": "candidates",
    "residuals": "residuals",
    "visits": "visits",
    "stop calibrating and keep the provisional bound": "provisional",
    "requirement": "requirement",
}
# What a name that goes on differently begins with.
_BY_BEGINNING = {
    "add a reading": "b-life",
    "kinds of reading": "b-life",
    "how often bounds hold": "simulated plan",
    "simulate this plan": "simulated plan",
    "stop simulating the plan": "simulated plan",
    "stop simulating p-values": "goodness of fit",
    "cells that cannot be read": "unread",
    "list all unread": "unread",
    "show the next unread": "unread",
    "readings side by side": "basis",
    "readings of all sets": "basis",
    "name of the set": "set",
    "add a set": "set",
    "what can be done to the set": "set",
    "how the table was read": "pasted table",
    "sheet of the file": "pasted table",
}
_BY_CHOICE = {
    "Bound": {
        "likelihood": "likelihood bound",
        "wald": "wald bound",
        "exact": "exact bound",
        "calibrated": "calibrated bound",
        "automatic": "automatic bound",
    },
    "Family": {"lognormal": "lognormal", "weibull": "weibull", "exponential": "exponential"},
    "Side": {"two": "two-sided bound"},
    "Fit method": {"maximum likelihood": "maximum likelihood"},
}
_BY_COLUMN = {
    "life": "life",
    "until": "found failed",
    "quantity": "quantity",
    "entered": "entered",
}
_BY_ASK = {
    "life": "b-life",
    "reliability": "reliability",
    "hazard": "hazard",
    "conditional_reliability": "conditional reliability",
    "residual_life": "mean residual life",
    "mean_life": "mean life",
    "mode": "density",
    "age_at_hazard": "hazard",
}
_BY_STATE = {"failed": "failed", "running": "running", "found failed": "found failed"}


def term(key: str) -> Term:
    """Return the term of a key."""
    return _BY_KEY[key]


def terms_holding(wanted: str) -> list[Term]:
    """Return the terms in which all words of `wanted` occur: those with it in the title first."""
    found = [entry for entry in TERMS if entry.holds(wanted)]
    return sorted(found, key=lambda entry: wanted.casefold() not in entry.title.casefold())


def term_for_cell(column: str, state: str) -> Term:
    """Return the term for a cell of the table of units, in a row of this state."""
    if column == "state":
        return term(_BY_STATE.get(state, "running"))
    return term(_BY_COLUMN.get(column, "unit"))


def term_for_ask(ask: Ask) -> Term:
    """Return the term for what was asked."""
    return term(_BY_ASK[ASK_NAMES[type(ask)]])


def term_for_caution(code: str) -> Term:
    """Return the term for a caution; the one on cautions as such where there is none of its own."""
    return _BY_KEY.get(f"caution {code}", _BY_KEY["caution"])


def term_for(widget: QWidget | None) -> Term | None:
    """Return the term for a widget, or for the nearest widget around it that has one."""
    for around in _outwards(widget):
        key = around.property(HELP_PROPERTY)
        if isinstance(key, str) and key in _BY_KEY:
            return _BY_KEY[key]
        name = around.accessibleName()
        chosen = around.currentData() if isinstance(around, QComboBox) else None
        key = _BY_CHOICE.get(name, {}).get(str(chosen)) or _key_of(_page_name(around) or name.casefold())
        if key is not None:
            return _BY_KEY[key]
    return None


def _key_of(name: str) -> str | None:
    beginnings = (key for beginning, key in _BY_BEGINNING.items() if name.startswith(beginning))
    return _BY_NAME.get(name) or next(beginnings, None)


def _outwards(widget: QWidget | None) -> Iterable[QWidget]:
    while widget is not None:
        yield widget
        widget = widget.parentWidget()


def _page_name(widget: QWidget) -> str:
    """Return the name of a page of the window, "" for any other widget."""
    name = getattr(widget, "name", "")
    return name.casefold() if isinstance(name, str) else ""
