"""Names for the array types that every stage passes on; shapes stand in the docstrings."""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Complexes = NDArray[np.complexfloating[Any, Any]]
Indices = NDArray[np.intp]
Flags = NDArray[np.bool_]
