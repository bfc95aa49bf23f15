"""The slow way to the extreme of a measure over a region: the outline about its best point, drawn ever more finely."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.shaped.measures import ShapedMeasure
from reliability_app.engine.shaped.outline import Outline, single_steps, pair_steps
from reliability_app.engine.shaped.profile import profile
from reliability_app.engine.shaped.rays import Rays, ray_ends
from reliability_app.engine.shaped.shaped_estimate import ShapedEstimate

Array = NDArray[np.float64]

_SLICES, _RAYS = 7, 7
_ZOOMS = 24
_ACCURACY = 1e-10
