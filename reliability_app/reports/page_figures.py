"""The pages that can be had as a picture, by the name of the page."""

from __future__ import annotations

from collections.abc import Callable, Mapping

from reliability_app.reports.curve_figures import hazard_figure, survival_figure
from reliability_app.reports.figure import Figure
from reliability_app.reports.further_figures import (
    cumulative_figure,
    density_figure,
    likelihood_figure,
    residual_figure,
)
from reliability_app.reports.paper_figure import paper_figure
from reliability_app.reports.shown import Shown

PAGES: Mapping[str, Callable[[Shown], Figure]] = {
    "paper": paper_figure,
    "hazard": hazard_figure,
    "cumulative hazard": cumulative_figure,
    "survival": survival_figure,
    "density": density_figure,
    "likelihood": likelihood_figure,
    "residuals": residual_figure,
}


def figure_of(page: str, shown: Shown) -> Figure | None:
    """Return the picture of a page by the name on its tab, or None for a page that has none."""
    build = PAGES.get(page.lower())
    return None if build is None else build(shown)
