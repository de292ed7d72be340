"""Numbers as JSON can hold them."""

from __future__ import annotations

from math import isfinite


def number(value: float | None) -> float | None:
    """A plain float; None for what is not stated, not known or has no end. Zero has no sign."""
    if value is None or not isfinite(value):
        return None
    # Adding zero takes the sign off -0.0; float() takes numpy's own types down to Python's.
    return float(value) + 0.0


def word(text: str | None) -> str | None:
    """A text; None for an empty one."""
    return text or None
