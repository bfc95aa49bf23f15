"""The line that simulates the plan of the set shown: a button, progress with a stop, how often bounds would hold."""

from __future__ import annotations

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QHBoxLayout, QPushButton, QSizePolicy, QWidget

from reliability_app.engine.coverage import TESTS
from reliability_app.session.analysis import SetAnalysis
from reliability_app.session.plan_simulation import SimulatedPlan, is_same_work, stale_sentence
from reliability_app.windows.units_grid.wrapped_label import wrapped_label


class PlanLine(QWidget):
    """Shows what came of simulating the plan of each set; hidden while there is nothing to show.

    Its `button` may stand elsewhere.

    Signals
    -------
    simulate_asked(SetAnalysis)
        The plan of this analysis is to be simulated.
    stop_asked()
        What is being simulated is not wanted any more.
    """

    simulate_asked = Signal(object)
    stop_asked = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._analysis: SetAnalysis | None = None
        self._simulated: SetAnalysis | None = None
        self._plans: dict[str, SimulatedPlan] = {}
        self.button = QPushButton("Simulate this plan")
        self.button.setToolTip("Say how often each kind of bound would hold in tests like this one")
        self.button.setAccessibleName("Simulate this plan: how often each kind of bound would hold")
        self.label = wrapped_label()
        policy = self.label.sizePolicy()
        # The readings below give up some of their height for it, not the chart above.
        policy.setVerticalPolicy(QSizePolicy.Policy.Preferred)
        self.label.setSizePolicy(policy)
        self.label.setAccessibleName("How often bounds hold under this plan")
        self.stop_button = QPushButton("Stop")
        self.stop_button.setAccessibleName("Stop simulating the plan")
        layout = QHBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        layout.addWidget(self.label, 1)
        layout.addWidget(self.stop_button, 0, Qt.AlignmentFlag.AlignTop)
        self.button.clicked.connect(self.simulate)
        self.stop_button.clicked.connect(self.stop)
        self._refresh()

    @property
    def is_simulating(self) -> bool:
        """True while the outcome of a simulation is waited for."""
        return self._simulated is not None

    def show_analysis(self, analysis: SetAnalysis | None) -> None:
        """Show what is known of the plan of an analysis; give up a simulation that is not about it."""
        self._analysis = analysis
        begun = self._simulated
        if begun is not None and (analysis is None or not is_same_work(begun.question, analysis.question)):
            self.stop()
        self._refresh()

    def simulate(self) -> None:
        """Ask for the plan shown to be simulated."""
        if self._analysis is not None and self.button.isEnabled():
            self._simulated = self._analysis
            self.show_progress(0)
            self._refresh()
            self.simulate_asked.emit(self._simulated)

    def stop(self) -> None:
        """Give up what is being simulated."""
        self._simulated = None
        self.stop_asked.emit()
        self._refresh()

    def show_progress(self, tests: int) -> None:
        """Show how many simulated tests have begun."""
        sides = 2 if self._simulated is not None and self._simulated.question.basis.side == "two" else 1
        self.label.setText(f"Simulating this plan: test {tests} of about {sides * TESTS}")

    def show_plan(self, plan: SimulatedPlan) -> None:
        """Show what came of it."""
        self._simulated = None
        self._plans[plan.question.name] = plan
        self._refresh()

    def show_failure(self) -> None:
        """Show that a simulation ended without an outcome."""
        self._simulated = None
        self._refresh()

    def forget(self) -> None:
        """Drop everything, because another session is shown."""
        self._plans.clear()
        self.show_analysis(None)

    def statement(self) -> str:
        """Return the sentence where it is about what is shown, else nothing."""
        plan, question = self._plan(), self._analysis.question if self._analysis else None
        return plan.sentence if plan is not None and question is not None and plan.is_about(question) else ""

    def _plan(self) -> SimulatedPlan | None:
        return self._plans.get(self._analysis.question.name) if self._analysis else None

    def _refresh(self) -> None:
        """Show what stands: progress, a result, a result that is out of date, or nothing."""
        plan = self._plan()
        fitted = self._analysis.fit if self._analysis else None
        self.button.setEnabled(fitted is not None and fitted.converged and not self.is_simulating)
        self.stop_button.setVisible(self.is_simulating)
        if not self.is_simulating and plan is not None:
            self.label.setText(self.statement() or stale_sentence(plan))
        self.setVisible(self.is_simulating or plan is not None)
