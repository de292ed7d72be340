"""`bench`: what the unit is measured with."""

from __future__ import annotations

from datetime import date
from typing import Any

from logbook.bench import Bench, PathPart
from logbook.fields import Asked, Field, day, many, mapping, quantity, text
from logbook.hardware import Parameter
from logbook.kind import Kind, Outcome, Session, View
from logbook.model import Block, Source, Values
from logbook.physics.decibels import watt_from_dbm
from logbook.physics.noise import noise_bandwidth_ratio
from logbook.pieces import Line, Note, Piece, Table, Text
from logbook.problems import did_you_mean
from logbook.quantity import Quantity, level_dbm
from logbook.quantity_display import show_value
from logbook.stage_fields import LEVEL
from logbook.yaml_nodes import Node, Scalar

FILTERS = ("gaussian", "gaussian_6db", "synchronous_4", "synchronous_5", "flat")


def _rbw_filter(node: Node, asked: Asked) -> float | None:
    """The ratio of noise bandwidth to RBW, by the filter's name or as a number."""
    if not isinstance(node, Scalar):
        asked.fault(node.place, "not-text", f"Expected {', '.join(FILTERS)} or a number at '{asked.what}'.")
        return None
    if node.text in FILTERS:
        return float(noise_bandwidth_ratio(node.text))
    if node.text[:1].isdigit():
        found = quantity("number", positive=True)(node, asked)
        return None if found is None else float(found.value)
    message = f"'{node.text}' is no RBW filter known here; expected {', '.join(FILTERS)} or a number."
    asked.fault(node.place, "unknown-word", message, did_you_mean(node.text, FILTERS))
    return None


FIELDS = (
    Field("bench", text(), required=True, help="The bench's name, such as 'bench: shack'."),
    Field(
        "reads",
        mapping(
            Field("accuracy", quantity("ratio")),
            Field("linearity", quantity("ratio")),
            Field("floor", quantity("density")),
            Field("max_input", quantity(LEVEL)),
            Field("rbw_filter", _rbw_filter),
        ),
    ),
    Field("drives", mapping(Field("accuracy", quantity("ratio")))),
    Field(
        "path",
        many(
            mapping(
                Field("name", text(), required=True),
                Field("loss", quantity("ratio", repeated=True), required=True),
                Field("max_input", quantity(LEVEL)),
            )
        ),
    ),
    Field("calibrated", day()),
    Field("due", day()),
    Field("note", text()),
)

EXAMPLE = """\
bench: shack
reads: {accuracy: ± 1.5 dB, linearity: ± 0.3 dB, floor: -150 dBm/Hz, max_input: 20 dBm, rbw_filter: gaussian}
drives: {accuracy: ± 0.8 dB}
path:
  - {name: tap, loss: 30 ± 0.4 dB, max_input: 25 W}
  - {name: pad, loss: 10 ± 0.2 dB, max_input: 2 W}
calibrated: 2026-02-01
due: 2027-02-01
"""


def declare(values: Values, session: Session) -> Bench | None:
    """The bench from this entry's date on."""
    name, since = values["bench"], session.entry.date.isoformat()
    known = session.benches.get(name)
    if known is not None and known.since == since:
        # Described again on the same day: another source of error, so another date in all that names it.
        since = f"{since}, later that day"
    reads: Any = values.get("reads", {})
    drives: Any = values.get("drives", {})

    def parameter(found: Quantity | None, part: str, what: str) -> Parameter | None:
        return None if found is None else Parameter(found.value, found.u, Source("bench", name, part, what, since))

    parts = _path(values, name, since, session)
    if parts is None or not _dates_in_order(values, session):
        return None
    linearity = reads.get("linearity")
    return Bench(
        name=name,
        since=since,
        place=values.start,
        accuracy=parameter(reads.get("accuracy"), "instrument", "accuracy"),
        linearity_u=None if linearity is None else linearity.u,
        floor_dbm_per_hz=reads["floor"].value if "floor" in reads else None,
        max_input_dbm=level_dbm(reads["max_input"], 50.0)[0] if "max_input" in reads else None,
        noise_ratio=reads.get("rbw_filter", 1.0),
        noise_ratio_stated="rbw_filter" in reads,
        drive_accuracy=parameter(drives.get("accuracy"), "source", "accuracy"),
        path=parts,
        calibrated=values.get("calibrated"),
        due=values.get("due"),
    )


def _path(values: Values, bench: str, since: str, session: Session) -> tuple[PathPart, ...] | None:
    parts: list[PathPart] = []
    for each in values.get("path", ()):
        if each["name"] in [part.name for part in parts]:
            session.fault(each.place("name"), "duplicate-part", f"Two parts of the path are named '{each['name']}'.")
            return None
        found = each["loss"]
        loss = Parameter(found.value, found.u, Source("bench", bench, each["name"], "loss", since))
        limit = level_dbm(each["max_input"], 50.0)[0] if "max_input" in each else None
        parts.append(PathPart(each["name"], loss, limit, each.start))
    return tuple(parts)


def _dates_in_order(values: Values, session: Session) -> bool:
    calibrated: date | None = values.get("calibrated")
    due: date | None = values.get("due")
    if calibrated and due and due < calibrated:
        session.fault(values.place("due"), "date", f"Due on {due}, before it was calibrated on {calibrated}.")
        return False
    return True


def show(block: Block, outcome: Outcome, view: View) -> list[Piece]:
    """The bench's instruments and path, with their doubt."""
    found = [bench for bench in outcome.data or () if isinstance(bench, Bench)]
    return [piece for bench in found for piece in show_bench(bench, view)]


def show_bench(bench: Bench, view: View) -> list[Piece]:
    """One bench as a table, with its calibration as it stands on the entry's date."""
    pieces: list[Piece] = [bench_table(bench)]
    if bench.calibrated is not None:
        until = f", due again on {bench.due}" if bench.due else ""
        pieces.append(Text(f"Calibrated on {bench.calibrated}{until}."))
    if bench.overdue(view.entry.date):
        pieces.append(Note(f"Its calibration was due on {bench.due}, before this entry.", "caution"))
    return pieces


def bench_table(bench: Bench) -> Table:
    """What a bench is made of, each part with its doubt and what it bears."""
    rows: list[tuple[Line, ...]] = []

    def doubt(u: float | None) -> str:
        return "not stated" if u is None else f"u = {show_value(u, 'dB')}"

    accuracy = bench.accuracy.u if bench.accuracy else None
    drive = bench.drive_accuracy.u if bench.drive_accuracy else None
    rows.append(("instrument, accuracy", "", doubt(accuracy), _limit(bench.max_input_dbm)))
    rows.append(("instrument, linearity", "", doubt(bench.linearity_u), ""))
    if bench.floor_dbm_per_hz is not None:
        rows.append(("instrument, own noise", show_value(bench.floor_dbm_per_hz, "dBm/Hz"), "", ""))
    if bench.noise_ratio_stated:
        rows.append(("noise bandwidth over RBW", f"{bench.noise_ratio:.4g}", "", ""))
    else:
        rows.append(("noise bandwidth over RBW", "1", "not stated, taken as 1", ""))
    rows.append(("source, accuracy", "", doubt(drive), ""))
    for part in bench.path:
        loss = show_value(part.loss.value, "dB")
        rows.append((f"{part.name}, loss", loss, doubt(part.loss.u), _limit(part.max_input_dbm)))
    head = ("part", "value", "standard uncertainty", "bears at most")
    return Table(head, tuple(rows), f"Bench {bench.name} as of {bench.since}", frozenset({1, 2, 3}))


def _limit(dbm: float | None) -> str:
    if dbm is None:
        return ""
    return f"{show_value(dbm, 'dBm')} ({show_value(float(watt_from_dbm(dbm)), 'W')})"


KIND = Kind(
    word="bench",
    title="Bench",
    about="The instruments and the path between them and the unit, with their accuracies. It holds from its entry on.",
    fields=FIELDS,
    example=EXAMPLE,
    declare=declare,
    show=show,
)
