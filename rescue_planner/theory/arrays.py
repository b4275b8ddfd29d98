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


_FEW = 8  # up to here numpy itself adds one after the other, so the sum is the same to the bit


def total(values: FloatArray) -> FloatArray:
    """Return the sum over the last axis; (..., K) -> (...); 0 where K = 0.

    The last axis is that of donors or sources, so it is short beside the axis of draws: adding
    whole columns is several times faster than numpy's sum along a short axis.
    """
    count = values.shape[-1]
    if not 0 < count <= _FEW:
        summed: FloatArray = np.sum(values, axis=-1)
        return summed
    column: FloatArray = values[..., 0]
    for i in range(1, count):
        column = column + values[..., i]
    return column
