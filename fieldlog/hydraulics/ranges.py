"""What the arguments of a formula may be, and results in the shape in which they were asked."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from fieldlog.errors import OutOfRangeError

# A number, or an array of them; functions give back what they were given.
Amount = Any


def finite(**named: ArrayLike) -> NDArray[np.float64]:
    """Return the one argument, by its name, as an array of finite numbers."""
    return _checked(named, np.isfinite, "give a finite number")


def not_negative(**named: ArrayLike) -> NDArray[np.float64]:
    """Return the one argument, by its name, as an array of finite numbers from 0 up."""
    return _checked(named, lambda value: np.isfinite(value) & (value >= 0), "give a number that is not negative")


def above_zero(**named: ArrayLike) -> NDArray[np.float64]:
    """Return the one argument, by its name, as an array of finite numbers above 0."""
    return _checked(named, lambda value: np.isfinite(value) & (value > 0), "give a number above 0")


def as_given(value: NDArray[np.float64]) -> Amount:
    """Return a float for floats, the array for arrays."""
    return float(value) if np.ndim(value) == 0 else value


def _checked(
    named: dict[str, ArrayLike], holds: Callable[[NDArray[np.float64]], NDArray[np.bool_]], mend: str
) -> NDArray[np.float64]:
    ((name, given),) = named.items()
    value = np.asarray(given, dtype=np.float64)
    if not bool(np.all(holds(value))):
        raise OutOfRangeError(f"{name}: {given!r} is outside the range of the formula; {mend}", name=name)
    return value
