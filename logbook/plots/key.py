"""What a drawing depends on, as a key for the cache."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import fields
from functools import lru_cache
from hashlib import sha256
from importlib.metadata import version
from typing import Any

import numpy as np

from logbook.cache import cache_key
from logbook.pieces import Bars, Chart
from logbook.plots.style import DRAWING


def drawing_key(drawing: Chart | Bars) -> str:
    """The same for the same drawing in any run; another where Matplotlib or our way to draw is another."""
    return cache_key("drawing", DRAWING, _matplotlib(), stable(drawing))


@lru_cache(maxsize=1)
def _matplotlib() -> str:
    # Asked of the installed package's metadata: importing it would cost what the cache saves.
    return version("matplotlib")


def stable(value: Any) -> str:
    """A drawing as text: numbers to the last bit, whether they stand in a tuple, a list or an array."""
    if isinstance(value, str) or value is None or isinstance(value, bool):
        return repr(value)
    if isinstance(value, float | int | np.number):
        return float(value).hex()
    if isinstance(value, np.ndarray):
        return _numbers(value.astype(float))
    if isinstance(value, Sequence):
        if len(value) and all(isinstance(each, float | int) for each in value):
            return _numbers(np.array(value, dtype=float))
        return "(" + ",".join(stable(each) for each in value) + ")"
    named = (f"{field.name}={stable(getattr(value, field.name))}" for field in fields(value))
    return f"{type(value).__name__}({','.join(named)})"


def _numbers(values: np.ndarray[Any, np.dtype[np.float64]]) -> str:
    return f"[{len(values)}:{sha256(np.ascontiguousarray(values, dtype='<f8').tobytes()).hexdigest()}]"
