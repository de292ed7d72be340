"""`sweep`: a measured trace, and what is read off it."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from math import log10
from typing import Any

import numpy as np

from logbook.fields import Asked, Field, Reader, choice, many, pair, quantity, text
from logbook.kind import Kind, Outcome, Session
from logbook.kinds._measured import Setting, derived, fresh, measured, not_on_a_plan, setting_of
from logbook.kinds._setting_fields import SETTING_FIELDS
from logbook.kinds._sweep_curve import Read, read_curve, with_article
from logbook.kinds._sweep_lines import find_lines
from logbook.kinds._sweep_reports import REPORTS, report
from logbook.kinds._trace import axis
from logbook.model import Block, Result, Values
from logbook.problems import did_you_mean
from logbook.quantities import BETTER, known_quantity
from logbook.quantity import Quantity
from logbook.showing.sweep import show_sweep
from logbook.sweep import Found, Request, Sweep
from logbook.yaml_nodes import Mapping, Node, Scalar, Sequence

SORTS = ("bandpass", "response", "spectrum", "noise")

# word -> dimension of its numbers ("" for none), at least so many; the lines of a spectrum are found in their own way.
_WORDS: dict[str, tuple[str, int]] = {
    word: (dimension, least) for sort in REPORTS.values() for word, (_, dimension, least) in sort.items()
} | {"lines": ("level", 0)}

# How many numbers a word takes that does not take any number of them.
_EXACTLY = {"shape_factor": 2, "flatness": 2, "density": 2, "power": 2, "ripple": 1, "lines": 1}

_SUCH = "Such as '- bandwidth: [3 dB, 60 dB]' or '- centre'."


def _request(node: Node, asked: Asked) -> tuple[Request, ...] | None:
    """`centre`, or `{bandwidth: [3 dB, 60 dB]}`."""
    if isinstance(node, Scalar):
        return _checked(node.text, node, None, asked)
    if isinstance(node, Mapping) and node.pairs:
        found = [_checked(key.text, key, value, asked) for key, value in node.pairs]
        return None if any(each is None for each in found) else tuple(r for each in found if each for r in each)
    asked.fault(node.place, "report", "A report is a word, or a word with numbers.", _SUCH)
    return None


def _checked(word: str, where: Node, numbers: Node | None, asked: Asked) -> tuple[Request, ...] | None:
    if word not in _WORDS:
        message = f"'{word}' is nothing that a sweep reports; expected one of {', '.join(_WORDS)}."
        hint = did_you_mean(word, _WORDS)
        asked.fault(where.place, "report", message, hint if hint.startswith("Did") else "")
        return None
    dimension, least = _WORDS[word]
    if numbers is None:
        if least:
            example = "28.7 MHz" if dimension == "frequency" else "3 dB"
            asked.fault(where.place, "report", f"'{word}' needs to be told where.", f"Write '- {word}: {example}'.")
            return None
        return (Request(word, (), where.place),)
    if not dimension:
        asked.fault(numbers.place, "report", f"'{word}' takes no numbers.", f"Write '- {word}'.")
        return None
    positive = dimension in ("ratio", "frequency")
    reader = quantity(dimension, positive=positive, instead="Give it as so many dB below the peak.")
    read: Any = many(reader)(numbers, Asked(word, asked.problems))
    exactly = _EXACTLY.get(word)
    if read is not None and exactly not in (None, len(read)):
        message = f"'{word}' takes {('one number', 'two numbers')[exactly - 1]}, not {len(read)}."
        asked.fault(numbers.place, "report", message)
        return None
    return None if read is None else (Request(word, tuple(each.value for each in read), where.place),)


def _reports() -> Reader:
    def read(node: Node, asked: Asked) -> tuple[Request, ...] | None:
        nodes = node.items if isinstance(node, Sequence) else (node,)
        found = [_request(each, asked) for each in nodes]
        return None if any(each is None for each in found) else tuple(r for each in found if each for r in each)

    return read


FIELDS = (
    Field("name", text(), required=True, help="The sweep's name; the next sweep of that name is compared with it."),
    Field("of", choice(*SORTS), required=True, help="What it is of: bandpass, response, spectrum or noise."),
    Field("file", text()),
    Field("points", many(pair(quantity(("frequency", "ratio", "level", "density"))), least=3)),
    Field("x", axis()),
    Field("y", axis()),
    Field("reference", text()),
    Field("report", _reports()),
    *SETTING_FIELDS,
    Field("at", quantity("frequency", positive=True)),
    Field("drive", quantity(("level", "voltage_level", "power", "voltage"))),
    Field("source_temperature", quantity("noise_temperature", positive=True)),
    Field("note", text()),
)

EXAMPLE = """\
name: if-filter
of: bandpass
points:
  - [21.390 MHz, -63.1 dB]
  - [21.393 MHz, -24.8 dB]
  - [21.396 MHz, -3.9 dB]
  - [21.398 MHz, -2.5 dB]
  - [21.400 MHz, -2.2 dB]
  - [21.402 MHz, -2.4 dB]
  - [21.404 MHz, -3.7 dB]
  - [21.407 MHz, -25.9 dB]
  - [21.410 MHz, -62.0 dB]
report:
  - insertion_loss
  - centre
  - bandwidth: [3 dB, 20 dB, 50 dB]
  - shape_factor: [50 dB, 3 dB]
  - rejection: 21.390 MHz
"""


def calculate(block: Block, session: Session) -> Outcome:
    """The curve on equal terms, and everything that is reported of it as results."""
    if not block.items or not not_on_a_plan("swept", block.place, session):
        return Outcome()
    values = block.items[0]
    setting = setting_of(values, session)
    if not _reports_fit(values, session) or setting is None:
        return Outcome()
    read = read_curve(values, setting, session)
    if read is None:
        return Outcome()
    found, notes, kept = _found(read, values, setting, session)
    results = [result for each in found if (result := _result(each, values, setting)) is not None]
    sweep = Sweep(
        name=values["name"],
        of=values["of"],
        x=read.shown.x,
        y=read.shown.y,
        unit=read.shown.unit,
        reference=values.get("reference", ""),
        marks=tuple((x, y + read.offset_db, words) for each in found for x, y, words in each.marks),
        notes=(*read.notes, *notes),
        results=tuple(results),
        lines=kept,
    )
    return Outcome(tuple(results), sweep)


def _reports_fit(values: Values, session: Session) -> bool:
    """Whether all that is asked for can be had from a sweep of this sort."""
    of = values["of"]
    known = [*REPORTS.get(of, {}), *(["lines"] if of == "spectrum" else [])]
    wrong = [request for request in values.get("report", ()) if request.word not in known]
    for request in wrong:
        message = f"A sweep of {with_article(of)} does not report '{request.word}'; it can report {', '.join(known)}."
        session.fault(request.place, "report", message)
    return not wrong


def _found(
    read: Read, values: Values, setting: Setting, session: Session
) -> tuple[list[Found], tuple[str, ...], dict[str, float]]:
    requests = values.get("report", ())
    if values["of"] != "spectrum":
        return report(read.curve, values["of"], requests), (), {}
    threshold = next((r.numbers[0] for r in requests if r.numbers), None)
    at = values.get("at")
    width = _width(read, values)
    lines = find_lines(read.curve, threshold, None if at is None else at.value, width, _earlier_lines(values, session))
    return list(lines.found), lines.notes, dict(lines.kept)


def _width(read: Read, values: Values) -> float:
    """How far a line's frequency may be read off: the RBW or the points' spacing, whichever is wider."""
    spacing = float(np.median(np.diff(read.curve.x)))
    rbw = values.get("rbw")
    return max(spacing, 0.0 if rbw is None else rbw.value)


def _earlier_lines(values: Values, session: Session) -> Iterable[float]:
    found = [each.outcome.data for each in session.earlier.get(("sweep", values["name"]), ())]
    sweeps = [each for each in found if isinstance(each, Sweep)]
    return sweeps[-1].lines.values() if sweeps else ()


def _result(found: Found, values: Values, setting: Setting) -> Result | None:
    """A number of a sweep as a result; levels and densities come onto equal terms as any reading does."""
    place = values.place("report")
    known = known_quantity(found.quantity)
    if known is not None and known.side == "shown" and found.value == found.value:
        return _level(found, found.quantity, found.value, setting, values)
    if found.quantity == "band_noise" and found.value == found.value:
        density = found.value - 10 * log10(found.width_hz)
        mean = _level(found, "noise_density", density, setting, values)
        if mean is None:
            return None
        return replace(
            mean,
            quantity="band_noise",
            value=mean.value + 10 * log10(found.width_hz),
            unit="dBm",
            shown=found.value,
            conditions=replace(mean.conditions, rbw_hz=None),
        )
    better = next((b for b in BETTER if b == found.better), None)
    parts = {fresh(place, found.quantity, "linearity"): found.u} if found.u else None
    return derived(
        found.quantity,
        found.value,
        found.unit,
        parts,
        setting,
        place,
        at_hz=found.at_hz,
        better=better,
        words=found.words,
    )


def _level(found: Found, quantity_: str, value: float, setting: Setting, values: Values) -> Result | None:
    dimension, unit = ("density", "dBm/Hz") if quantity_ == "noise_density" else ("level", "dBm")
    shown = Quantity(value, unit, dimension, None, f"{value:.2f} {unit}")
    result = measured(quantity_, shown, setting, values.place("report"), found.at_hz)
    return None if result is None else replace(result, repeats=(), words=found.words)


MORE = """\
A file's head names its units, as in `Frequency (MHz);Level (dB)`; without them write `x: {column: 1, unit: MHz}` and
`y: {column: 2, unit: dB}`. Columns are told by their head or by their number.
"""

KIND = Kind(
    word="sweep",
    title="Sweep",
    about=(
        "A measured trace, from a CSV of any instrument, a Touchstone file, or `points`. `of` says what it is of. A "
        "`bandpass` can report peak, insertion_loss, centre, bandwidth, shape_factor, ripple, skirt_balance and "
        "rejection; a `response` gain, flatness and peak; a `spectrum` its lines above a level (as shown) and which "
        "are harmonics of `at`; `noise` density, power in a band, and spot. `reference` names an earlier sweep, or a "
        "file, to subtract; `x` and `y` choose the columns, and the parameter of a Touchstone file."
    ),
    fields=FIELDS,
    example=EXAMPLE,
    needs_revision=True,
    calculate=calculate,
    show=show_sweep,
    name_key="name",
    more=MORE,
)
