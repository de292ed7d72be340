"""The constants that everything here rests on, and the type of a number or an array of numbers."""

from __future__ import annotations

import math
from typing import TypeVar

import numpy as np
import numpy.typing as npt

Array = npt.NDArray[np.float64]

V = TypeVar("V", float, Array, float | Array)
"""One number or an array of numbers: what goes in comes out; mixed inputs are broadcast."""

BOLTZMANN = 1.380649e-23
"""J/K, exact. Source: SI 2019."""

T0 = 290.0
"""K, the reference temperature of noise figures. Source: IEEE convention."""

KT0_DBM_HZ = 10.0 * math.log10(BOLTZMANN * T0) + 30.0
"""10 lg(k T0 / 1 mW) = -173.975 dBm/Hz. Source: closed form from the two above."""

ZERO_CELSIUS = 273.15
"""K. Source: SI."""

EULER_GAMMA = 0.5772156649015329
"""Euler's constant. Source: closed form, to double precision."""

DB_PER_NEPER_POWER = 4.342944819032518
"""10 / ln 10: dB for a relative change of power by one. Source: closed form."""
