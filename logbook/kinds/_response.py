"""A stage's response from a Touchstone file: |S21| over frequency."""

from __future__ import annotations

import numpy as np

from logbook.hardware import Response
from logbook.kind import Session
from logbook.problems import Place


def read_response(file: str, place: Place, session: Session) -> Response | None:
    """The response in a file named by a stage; None with a fault."""
    from logbook.traces.touchstone import magnitude_db, read_touchstone

    data = session.read_file(file, place)
    if data is None:
        return None
    before = len(session.problems)
    found = read_touchstone(data, session.file_path(file), session.problems)
    if found is None or len(session.problems) > before:
        return None
    if found.s.shape[1] < 2:
        session.fault(place, "response", f"'{file}' has one port; a stage's response needs S21.", "Give a .s2p file.")
        return None
    gain = magnitude_db(found, 2, 1)
    if not np.isfinite(gain).all():
        message = f"'{file}' has points where nothing at all gets through; a stage's response needs a gain at each."
        session.fault(place, "response", message, "Leave these points out of the file.")
        return None
    return Response(file, tuple(map(float, found.frequency_hz)), tuple(map(float, gain)))
