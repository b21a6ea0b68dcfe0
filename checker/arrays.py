"""The array types of the house; at run time all are `numpy.ndarray`, for `numpy.typing` costs two milliseconds."""

from __future__ import annotations

from typing import TYPE_CHECKING, TypeAlias

import numpy as np

if TYPE_CHECKING:
    from numpy.typing import NDArray

    FloatArray: TypeAlias = NDArray[np.float64]
    ComplexArray: TypeAlias = NDArray[np.complex128]
    IntArray: TypeAlias = NDArray[np.int64]
    BoolArray: TypeAlias = NDArray[np.bool_]
else:
    FloatArray = ComplexArray = IntArray = BoolArray = np.ndarray
