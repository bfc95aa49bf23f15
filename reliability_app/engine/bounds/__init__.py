"""Bounds of a measure at a confidence: one file a kind, chosen by name here."""

from reliability_app.engine.bounds.bounder import Bounder
from reliability_app.engine.bounds.calibrated import Proceed
from reliability_app.engine.bounds.kinds import BOUND_KINDS, SIDES, check_bound

__all__ = ["BOUND_KINDS", "SIDES", "Bounder", "Proceed", "check_bound"]
