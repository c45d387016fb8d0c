"""Functions for floats and arrays alike: the mathematics of floats costs a tenth of numpy's."""

from __future__ import annotations

import math
from typing import Any

import numpy as np


def sqrt(x: Any) -> Any:
    """Square root."""
    return math.sqrt(x) if x.__class__ is float else np.sqrt(x)


def log(x: Any) -> Any:
    """Natural logarithm."""
    return math.log(x) if x.__class__ is float else np.log(x)


def exp(x: Any) -> Any:
    """Exponential function."""
    return math.exp(x) if x.__class__ is float else np.exp(x)


def arctan2(y: Any, x: Any) -> Any:
    """Angle of the point (x, y)."""
    if x.__class__ is float and y.__class__ is float:
        return math.atan2(y, x)
    return np.arctan2(y, x)


def where(condition: Any, yes: Any, no: Any) -> Any:
    """Choose element by element."""
    if condition.__class__ is bool:
        return yes if condition else no
    return np.where(condition, yes, no)


def frozen(x: Any) -> Any:
    """Return a copy of an array that nobody can change."""
    copy = np.array(x)
    copy.setflags(write=False)
    return copy


def least(x: Any) -> float:
    """Return the smallest element: NaN where there is one, infinity for no element."""
    if x.__class__ is float:
        return x
    # argmin and item cost a quarter of a reduction on short arrays.
    return x.item(x.argmin()) if x.size else math.inf


def greatest(x: Any) -> float:
    """Return the largest element: NaN where there is one, minus infinity for no element."""
    if x.__class__ is float:
        return x
    return x.item(x.argmax()) if x.size else -math.inf
