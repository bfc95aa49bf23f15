"""The engine's public face: life data in, fits, bounds and curves out."""

from reliability_app.engine.cautions import Caution, Severity
from reliability_app.engine.curves import Curve
from reliability_app.engine.empirical import kaplan_meier, nelson_aalen, plotting_positions
from reliability_app.engine.existence import Outcome
from reliability_app.engine.families import FAMILY_NAMES
from reliability_app.engine.fit_result import Fit
from reliability_app.engine.fitting import fit
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.methods import METHODS, methods_for
from reliability_app.engine.turnbull import turnbull

__all__ = [
    "FAMILY_NAMES",
    "METHODS",
    "Caution",
    "Curve",
    "Fit",
    "LifeData",
    "Outcome",
    "Severity",
    "fit",
    "kaplan_meier",
    "methods_for",
    "nelson_aalen",
    "plotting_positions",
    "turnbull",
]
