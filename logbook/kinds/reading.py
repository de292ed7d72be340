"""`reading`: measured numbers with their conditions."""

from __future__ import annotations

from dataclasses import dataclass

from logbook.bench import Bench
from logbook.fields import Asked, Field, choice, many, named, quantity, read_mapping, text
from logbook.kind import Kind, Outcome, Session
from logbook.model import MEASURED, PLANNED, Block, Conditions, Result, Values
from logbook.problems import did_you_mean
from logbook.quantities import BETTER, KNOWN, Better, KnownQuantity, known_quantity
from logbook.quantity import Quantity, level_dbm
from logbook.quantity_display import show_value
from logbook.showing.readings import show_results
from logbook.stage_fields import LEVEL
from logbook.terms import Shown, on_equal_terms
from logbook.units import DIMENSIONS
from logbook.yaml_nodes import Node, Scalar
from logbook.yaml_nodes import Sequence as YamlSequence

AVERAGING = ("power", "log", "voltage", "peak")

# A unit of K can be meant in three ways; for a name of the user's own it is a temperature.
_ANY = tuple(name for name in DIMENSIONS if name not in ("noise_temperature", "temperature_difference"))


@dataclass(frozen=True, slots=True)
class Given:
    """One result as written: its value, and the direction where the user states it."""

    value: Quantity
    better: Better | None


def _dimension(known: KnownQuantity | None) -> str | tuple[str, ...]:
    if known is None:
        return _ANY
    return (*LEVEL, "voltage") if known.dimension == "level" else known.dimension


def _result(node: Node, asked: Asked) -> Given | None:
    """A result: a quantity for a name that is known, a mapping with value and direction for any other."""
    known = known_quantity(asked.what)
    value = quantity(_dimension(known), repeated=True)
    if isinstance(node, Scalar | YamlSequence):
        if known is None:
            hint = did_you_mean(asked.what, KNOWN)
            hint = hint if hint.startswith("Did") else "A name of your own is written {value: 3.1 V, better: higher}."
            asked.fault(node.place, "unknown-quantity", f"'{asked.what}' is no quantity known by name.", hint)
            return None
        found = value(node, asked)
        return None if found is None else Given(found, None)
    fields = (Field("value", value, required=True), Field("better", choice(*BETTER), required=known is None))
    values = read_mapping(node, fields, Asked(f"'{asked.what}'", asked.problems))
    return None if values is None else Given(values["value"], values.get("better"))


FIELDS = (
    Field("chain", text()),
    Field("bench", text()),
    Field("through", many(text(), least=0)),
    Field("through_detector", text()),
    Field("name", text()),
    Field("at", quantity("frequency", positive=True)),
    Field("drive", quantity(LEVEL)),
    Field("rbw", quantity("frequency", positive=True)),
    Field("vbw", quantity("frequency", positive=True)),
    Field("averaging", choice(*AVERAGING)),
    Field("temperature", quantity("temperature")),
    Field("source_temperature", quantity("noise_temperature", positive=True)),
    Field("shown_at", choice("instrument", "unit")),
    Field("note", text()),
    Field("results", named(_result), required=True, help="Such as 'results: {gain: 41.8 dB}'."),
)

EXAMPLE = """\
at: 50.1 MHz
rbw: 10 kHz
averaging: power
bench: shack
through: [tap, pad]
results:
  output_noise: -118.4(3) dBm
  gain: [41.8 dB, 41.9 dB, 41.7 dB]
  agc_line: {value: 3.1 V, better: neither}
"""


def calculate(block: Block, session: Session) -> Outcome:
    """Every value of the block as a result on equal terms."""
    found: list[Result] = []
    if session.revision is not None and session.revision.state == PLANNED:
        message = f"Revision {session.label} is planned; nothing can be read on it yet."
        session.fault(block.place, "reading-of-plan", message, "Name the revision that was on the bench.")
        return Outcome()
    for values in block.items:
        chain = session.chain_name(values)
        bench = session.bench_of(values)
        if chain is None or ("bench" in values and bench is None) or not _through_known(values, bench, session):
            continue
        conditions = conditions_of(values, chain, bench, session)
        for name, given in values["results"].items():
            result = _one(name, given, values, chain, conditions, bench, session)
            if result is not None:
                found.append(result)
    return Outcome(tuple(found))


def impedance_of(chain: str, session: Session) -> float:
    """The chain's impedance; 50 ohm for a chain that is not described."""
    known = session.chains.get(chain)
    return 50.0 if known is None else known.impedance_ohm


def conditions_of(values: Values, chain: str, bench: Bench | None, session: Session) -> Conditions:
    """The conditions that a block states, in base units."""

    def base(key: str) -> float | None:
        found = values.get(key)
        return None if found is None else found.value

    drive = values.get("drive")
    return Conditions(
        bench=values.get("bench"),
        bench_from=None if bench is None else bench.since,
        rbw_hz=base("rbw"),
        vbw_hz=base("vbw"),
        averaging=values.get("averaging"),
        through=tuple(values.get("through", ())),
        shown_at=values.get("shown_at"),
        drive_dbm=None if drive is None else level_dbm(drive, impedance_of(chain, session))[0],
        temperature_c=base("temperature"),
        source_temperature_k=base("source_temperature"),
    )


def _through_known(values: Values, bench: Bench | None, session: Session) -> bool:
    names = values.get("through", ())
    if names and bench is None:
        message = "'through' names parts of a bench's path, and no bench is named."
        session.fault(values.place("through"), "unknown-bench", message, "Add 'bench:'.")
        return False
    unknown = [name for name in names if bench is not None and bench.part(name) is None]
    for name in unknown:
        assert bench is not None
        message = f"'{name}' is no part of the path of bench '{bench.name}'."
        hint = did_you_mean(name, [part.name for part in bench.path])
        session.fault(values.place("through"), "unknown-part", message, hint)
    return not unknown


def _one(
    name: str, given: Given, values: Values, chain: str, conditions: Conditions, bench: Bench | None, session: Session
) -> Result | None:
    known = known_quantity(name)
    place = values["results"].place(name)
    value, u, unit = _in_base(given.value, known, impedance_of(chain, session))
    shown = Shown(value, u, f"{place.file}:{place.line}", name, conditions)
    equal = on_equal_terms(shown, known, bench)
    if not bears(value, equal.value, known, conditions, bench, values, session):
        return None
    at = values.get("at")
    notes = list(equal.notes)
    if bench is not None and bench.overdue(session.entry.date):
        notes.append(f"read after the calibration of bench {bench.name} was due ({bench.due})")
    return Result(
        quantity=name,
        chain=chain,
        at_hz=None if at is None else at.value,
        name=values.get("name", ""),
        revision=session.label,
        entry=session.entry.path,
        line=place.line,
        block=session.block.kind,
        basis=MEASURED,
        value=equal.value,
        unit=unit,
        better=given.better or (known.better if known else "neither"),
        parts=equal.parts or None,
        conditions=conditions,
        shown=value,
        corrections=equal.corrections,
        bound=equal.bound,
        notes=tuple(notes),
        repeats=given.value.repeats,
        noise_ratio=1.0 if bench is None else bench.noise_ratio,
    )


def _in_base(value: Quantity, known: KnownQuantity | None, impedance: float) -> tuple[float, float | None, str]:
    if known is not None and known.dimension == "level":
        dbm, u = level_dbm(value, impedance)
        return dbm, u, "dBm"
    return value.value, value.u, value.unit


def bears(
    shown: float,
    at_unit: float,
    known: KnownQuantity | None,
    conditions: Conditions,
    bench: Bench | None,
    values: Values,
    session: Session,
) -> bool:
    """Whether the instrument and the path bear the level that was read; a fault with a caution when they do not."""
    if bench is None or known is None or known.dimension != "level" or known.side != "shown":
        return True
    path = [part for part in bench.path if part.name in conditions.through]
    level = at_unit
    steps: list[tuple[str, float, float | None]] = []
    for part in path:
        steps.append((part.name, level, part.max_input_dbm))
        level -= part.loss.value
    at_instrument = shown if conditions.shown_at != "unit" else level
    steps.append(("the instrument", at_instrument, bench.max_input_dbm))
    over: list[tuple[str, float, float]] = [
        (n, found, most) for n, found, most in steps if most is not None and found > most
    ]
    for name, found, most in over:
        message = f"{name} would get {show_value(found, 'dBm')}; it bears {show_value(most, 'dBm')} at most."
        hint = "Caution: switch off, and put more loss ahead of it before you read again."
        session.fault(values.start, "overload", message, hint)
    return not over


KIND = Kind(
    word="reading",
    title="Readings",
    about="Measured numbers with the conditions they were read under. Levels are what the instrument shows.",
    fields=FIELDS,
    example=EXAMPLE,
    many=True,
    needs_revision=True,
    calculate=calculate,
    show=show_results,
)
