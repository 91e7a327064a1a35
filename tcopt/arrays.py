"""The one array type: numbers in double precision, any shape."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

__all__ = ["Array"]

Array = NDArray[np.float64]
