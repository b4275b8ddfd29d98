"""Shared types of arrays, and the few conversions that every formula needs."""

from typing import TypeAlias

import numpy as np
from numpy.typing import ArrayLike, NDArray

FloatArray: TypeAlias = NDArray[np.float64]
IntArray: TypeAlias = NDArray[np.int64]
BoolArray: TypeAlias = NDArray[np.bool_]
Numbers: TypeAlias = ArrayLike
"""What a formula takes: a number, a nested list or an array."""


def floats(value: Numbers) -> FloatArray:
    """Return `value` as double-precision floats; any shape."""
    return np.asarray(value, dtype=np.float64)


def total(values: FloatArray) -> FloatArray:
    """Return the sum over the last axis; (..., K) -> (...); 0 where K = 0."""
    summed: FloatArray = np.sum(values, axis=-1)
    return summed
