"""A sweep as pieces: drawn over the one before it with their difference, what was found, and its points as a file."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise
from math import isfinite

import numpy as np

from logbook.kind import Earlier, Outcome, View
from logbook.model import Block
from logbook.physics.constants import Array
from logbook.physics.curves import Indices
from logbook.pieces import Axis, Chart, Download, Line, Mark, Note, Picture, Piece, Series, Table
from logbook.quantity_display import show_frequency, show_value
from logbook.showing.readings import show_results
from logbook.sweep import Sweep

# Points of one sweep that are drawn at most, and as many as may stand in the table beneath.
_DRAWN = 1200
_IN_TABLE = 24
_MARKS = 12

_AXES = {"bandpass": "gain, dB", "response": "gain, dB", "spectrum": "level, dBm", "noise": "density, dBm/Hz"}


@dataclass(frozen=True, slots=True, eq=False)
class _Drawn:
    """What is drawn: x in the axis' unit, now, and before with its label where there is an earlier sweep."""

    x_hz: Array
    x: Array
    unit: str
    now: Array
    before: Array | None
    label: str


def show_sweep(block: Block, outcome: Outcome, view: View) -> list[Piece]:
    """The sweep, what is read off it, and its points."""
    sweep = outcome.data
    if not isinstance(sweep, Sweep):
        return []
    earlier = _earlier(sweep, block, view)
    drawn = _drawn(sweep, earlier)
    pieces: list[Piece] = [_picture(sweep, drawn)]
    pieces += [Note(note, "caution") for note in sweep.notes]
    pieces += show_results(block, outcome, view)
    return [*pieces, _download(sweep, drawn)]


def _earlier(sweep: Sweep, block: Block, view: View) -> tuple[Earlier, Sweep] | None:
    """The last sweep of this name on an ancestor revision; without one, the last on this revision before it."""
    before: list[tuple[Earlier, Sweep]] = []
    for each in view.earlier.get(("sweep", sweep.name), ()):
        if (each.block.entry, each.block.number) == (block.entry, block.number):
            break
        found = each.outcome.data
        if isinstance(found, Sweep) and found.unit == sweep.unit:
            before.append((each, found))
    own = view.revision.label if view.revision is not None else ""
    line = _ancestors(own, view)
    on_ancestor = [each for each in before if each[0].revision in line]
    same = [each for each in before if each[0].revision == own]
    chosen = on_ancestor or same
    return chosen[-1] if chosen else None


def _ancestors(label: str, view: View) -> set[str]:
    found: set[str] = set()
    current = view.revisions.get(label)
    while current is not None and current.comes_from is not None and current.comes_from not in found:
        found.add(current.comes_from)
        current = view.revisions.get(current.comes_from)
    return found


def _drawn(sweep: Sweep, earlier: tuple[Earlier, Sweep] | None) -> _Drawn:
    kept = _thinned(sweep.y)
    before, label = None, ""
    if earlier is not None:
        known = earlier[1]
        there = np.interp(sweep.x, known.x, known.y, left=np.nan, right=np.nan)
        # A line that has gone since is as much worth drawing as one that has come.
        kept = np.union1d(kept, _thinned(there))
        before = there[kept]
        label = f"{earlier[0].revision}, {earlier[0].entry.date}"
    x, now = sweep.x[kept], sweep.y[kept]
    scale, unit = _scale(float(sweep.x[-1]))
    return _Drawn(x, x / scale, unit, now, before, label)


def _thinned(y: Array) -> Indices:
    """Indices of the first, lowest, highest and last point of each of some hundred groups, in order."""
    n = len(y)
    if n <= _DRAWN:
        return np.arange(n)
    edges = np.linspace(0, n, _DRAWN // 4 + 1).astype(np.intp)
    kept: set[int] = set()
    for start, stop in pairwise(edges):
        part = np.nan_to_num(y[start:stop], nan=0.0)
        kept |= {int(start), int(stop - 1), int(start + part.argmin()), int(start + part.argmax())}
    return np.array(sorted(kept))


def _scale(highest_hz: float) -> tuple[float, str]:
    for scale, unit in ((1e9, "GHz"), (1e6, "MHz"), (1e3, "kHz")):
        if highest_hz >= scale:
            return scale, unit
    return 1.0, "Hz"


def _picture(sweep: Sweep, drawn: _Drawn) -> Picture:
    x = list(map(float, drawn.x))
    series = [Series("now", x, list(map(float, drawn.now)), "now")]
    below = None
    if drawn.before is not None:
        series.insert(0, Series(drawn.label, x, list(map(float, drawn.before)), "before"))
        difference = list(map(float, drawn.now - drawn.before))
        below = Chart(
            Axis(f"frequency, {drawn.unit}"),
            Axis("difference, dB"),
            (Series(f"now less {drawn.label}", x, difference, "difference"),),
        )
    scale = float(drawn.x_hz[-1] / drawn.x[-1])
    marks = tuple(Mark(at / scale, y, words) for at, y, words in sweep.marks[:_MARKS] if isfinite(y))
    top = int(np.nanargmax(sweep.y))
    alt = (
        f"{sweep.name}: {len(sweep.x)} points from {show_frequency(float(sweep.x[0]))} to "
        f"{show_frequency(float(sweep.x[-1]))}, highest {show_value(float(sweep.y[top]), sweep.unit)} at "
        f"{show_frequency(float(sweep.x[top]))}."
    )
    if drawn.before is not None:
        alt += f" The one before it, on revision {drawn.label}, is drawn beneath, with the difference."
    return Picture(
        title=f"Sweep of {sweep.name}",
        drawing=Chart(Axis(f"frequency, {drawn.unit}"), Axis(_AXES[sweep.of]), tuple(series), marks=marks, below=below),
        alt=alt,
        numbers=_numbers(sweep, drawn),
    )


def _numbers(sweep: Sweep, drawn: _Drawn) -> Table:
    """Some points, evenly spread, and those that are marked; all that is drawn can be taken away as a file."""
    picked = np.unique(np.linspace(0, len(drawn.x) - 1, min(_IN_TABLE, len(drawn.x))).astype(np.intp))
    rows: list[tuple[Line, ...]] = []
    for i in picked:
        cells: list[Line] = [show_frequency(float(drawn.x_hz[i])), show_value(float(drawn.now[i]), sweep.unit)]
        if drawn.before is not None:
            old = float(drawn.before[i])
            cells.append(show_value(old, sweep.unit) if isfinite(old) else "")
            cells.append(f"{float(drawn.now[i]) - old:+.2f} dB" if isfinite(old) else "")
        rows.append(tuple(cells))
    head = ("frequency", "now", *((drawn.label, "difference") if drawn.before is not None else ()))
    caption = f"{len(picked)} of {len(sweep.x)} points" if len(picked) < len(sweep.x) else ""
    return Table(head, tuple(rows), caption, frozenset(range(len(head))))


def _download(sweep: Sweep, drawn: _Drawn) -> Download:
    unit = sweep.unit.replace("/", "_per_")
    columns = [drawn.x_hz, drawn.now]
    head = f"frequency_Hz,now_{unit}"
    if drawn.before is not None:
        columns += [drawn.before, drawn.now - drawn.before]
        head += f",before_{unit},difference_dB"
    lines = [
        ",".join("" if not isfinite(v) else f"{v:.10g}" for v in map(float, row)) for row in zip(*columns, strict=True)
    ]
    content = "\n".join([head, *lines, ""])
    return Download(f"What is drawn, as CSV ({len(lines)} points)", f"{sweep.name}.csv", content)
