"""A trace: one quantity over another, as an instrument recorded it."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

Floats = npt.NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Trace:
    """`y` over rising `x`, both (N,), in the base units `x_unit` and `y_unit` (Hz, dB, dBm ...); read-only arrays."""

    name: str
    file: str
    x: Floats
    x_unit: str
    y: Floats
    y_unit: str


def frozen(values: Floats) -> Floats:
    """A copy that cannot be written to."""
    copy = np.array(values, dtype=np.float64)
    copy.flags.writeable = False
    return copy
