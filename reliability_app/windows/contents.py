"""Builds what stands in the window's frame: units and basis on the left page, pictures and readings on the right."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QSplitter, QTabWidget, QVBoxLayout, QWidget

from reliability_app.session.document import Session
from reliability_app.session.edits import Edit
from reliability_app.session.messages import Messages
from reliability_app.windows.charts.chart import Chart
from reliability_app.windows.charts.chart_page import ChartPage
from reliability_app.windows.charts.curve_page import HazardPage, SurvivalPage
from reliability_app.windows.charts.further_pages import CumulativeHazardPage, DensityPage
from reliability_app.windows.charts.likelihood_page import LikelihoodPage
from reliability_app.windows.charts.paper_page import PaperPage
from reliability_app.windows.charts.residuals_page import ResidualsPage
from reliability_app.windows.message_bar import MessageBar
from reliability_app.windows.panels.basis_panel import BasisPanel
from reliability_app.windows.panels.candidates_page import CandidatesPage
from reliability_app.windows.panels.reading_panel import ReadingPanel
from reliability_app.windows.panels.visits_page import VisitsPage
from reliability_app.windows.set_bar import SetBar
from reliability_app.windows.units_grid.units_grid import UnitsGrid
from reliability_app.windows.visit_offer import VisitOffer


class Contents(QSplitter):
    """The notebook spread: all panels of the window, not yet wired to anything but `push_edit`."""

    def __init__(
        self, session: Session, push_edit: Callable[[Edit], None], messages: Messages, parent: QWidget | None = None
    ) -> None:
        super().__init__(Qt.Orientation.Horizontal, parent)
        self.message_bar = MessageBar()
        self.set_bar = SetBar(session, push_edit, messages)
        self.grid = UnitsGrid(push_edit)
        self.basis = BasisPanel(push_edit)
        self.paper = PaperPage()
        self.hazard = HazardPage()
        self.survival = SurvivalPage()
        self.density = DensityPage()
        self.cumulative = CumulativeHazardPage()
        self.likelihood = LikelihoodPage()
        self.residuals = ResidualsPage()
        self.candidates = CandidatesPage()
        self.visits = VisitsPage(session)
        self.visit_offer = VisitOffer()
        self.tabs = QTabWidget()
        self.tabs.setAccessibleName("Pages")
        self._add_pages()
        self.reading = ReadingPanel(push_edit)
        self.right = QSplitter(Qt.Orientation.Vertical)
        self.right.addWidget(self.tabs)
        self.right.addWidget(self.reading)
        self.right.setStretchFactor(0, 1)
        self.right.setSizes([450, 290])
        self.addWidget(_column(self.set_bar, self.grid, self.basis))
        self.addWidget(_column(self.message_bar, self.visit_offer, self.right))
        self.setStretchFactor(1, 1)
        self.setSizes([460, 780])
        self.setChildrenCollapsible(False)
        self.right.setChildrenCollapsible(False)

    @property
    def pages(self) -> tuple[ChartPage, ...]:
        """The pages over age, which show the reading, in the order of their tabs."""
        return self.paper, self.hazard, self.survival, self.density, self.cumulative

    @property
    def charts(self) -> tuple[Chart, ...]:
        """All pages with a chart."""
        return *self.pages, self.likelihood, self.residuals

    def _add_pages(self) -> None:
        titles: tuple[tuple[QWidget, str], ...] = (
            (self.paper, "&Paper"),
            (self.hazard, "Ha&zard"),
            (self.survival, "Surviva&l"),
            (self.density, "De&nsity"),
            (self.cumulative, "C&umulative hazard"),
            (self.likelihood, "L&ikelihood"),
            (self.residuals, "&Residuals"),
            (self.candidates, "Candidates"),
            (self.visits, "Visits"),
        )
        for page, title in titles:
            self.tabs.addTab(page, title)


def _column(*widgets: QWidget) -> QWidget:
    column = QWidget()
    layout = QVBoxLayout(column)
    layout.setContentsMargins(6, 6, 6, 6)
    for widget in widgets:
        layout.addWidget(widget)
    return column
