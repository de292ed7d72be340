"""What every kind of block with numbers from the bench has in common: its setting, and results on equal terms."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Protocol

from logbook.bench import Bench
from logbook.detector import Calibration
from logbook.kind import Outcome, Session
from logbook.model import DERIVED, MEASURED, PLANNED, PREDICTED, Block, Conditions, Parts, Result, Source, Values
from logbook.prediction import TOTAL_UNITS
from logbook.problems import Place, did_you_mean
from logbook.quantities import KNOWN, SPOKEN, Better, KnownQuantity, known_quantity
from logbook.quantity import Quantity, level_dbm
from logbook.quantity_display import show_frequency, show_value
from logbook.terms import Shown, on_equal_terms


@dataclass(frozen=True, slots=True)
class Setting:
    """How the numbers of one mapping were taken: its chain, its bench, and the conditions that it states."""

    values: Values
    chain: str
    bench: Bench | None
    conditions: Conditions
    session: Session


class _Made(Protocol):
    """What one mapping comes to."""

    @property
    def results(self) -> tuple[Result, ...]: ...


def each_mapping(block: Block, session: Session, one: Callable[[Values, Session], _Made | None]) -> Outcome:
    """The outcome of a block whose mappings come each to something with results; the faulty ones are left out."""
    found = [one(values, session) for values in block.items]
    sound = [each for each in found if each is not None]
    return Outcome(tuple(result for each in sound for result in each.results), tuple(sound))


def likely_quantity(name: str) -> str:
    """A sentence that names the quantity that was probably meant, or nothing."""
    spoken = SPOKEN.get(name.lower())
    return f"Did you mean '{spoken}'?" if spoken else did_you_mean(name, KNOWN)


def setting_of(values: Values, session: Session) -> Setting | None:
    """The setting that a mapping states; None with a fault when its chain, bench or path is not known."""
    chain = session.chain_name(values)
    bench = session.bench_of(values)
    if chain is None or ("bench" in values and bench is None) or not _through_known(values, bench, session):
        return None
    return Setting(values, chain, bench, conditions_of(values, chain, bench, session), session)


def not_on_a_plan(what: str, place: Place, session: Session) -> bool:
    """Whether something can have been read on the revision; a fault when it is only planned."""
    if session.revision is None or session.revision.state != PLANNED:
        return True
    message = f"Revision {session.label} is planned; nothing can be {what} on it yet."
    session.fault(place, "reading-of-plan", message, "Name the revision that was on the bench.")
    return False


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
    sound = True
    for number, name in enumerate(names):
        if bench is None or bench.part(name) is not None:
            continue
        sound = False
        message = f"'{name}' is no part of the path of bench '{bench.name}'."
        hint = did_you_mean(name, [part.name for part in bench.path])
        session.fault(values.place("through", number), "unknown-part", message, hint)
    return sound


def measured(
    quantity: str, value: Quantity, setting: Setting, place: Place, at_hz: float | None, better: Better | None = None
) -> Result | None:
    """A number as it was read, as a result on equal terms; None with a fault when something would not bear it."""
    session, bench, values = setting.session, setting.bench, setting.values
    known = known_quantity(quantity)
    if bench is not None and "through_detector" in values and known is not None and known.dimension == "level":
        bench = bench.behind_a_detector()
    read = _in_base(value, known, setting, place)
    if read is None:
        return None
    shown = Shown(read.value, read.u, f"{place.file}:{place.line}", quantity, setting.conditions)
    equal = on_equal_terms(shown, known, bench)
    if not bears(read.value, equal.value, known, setting.conditions, bench, place, session):
        return None
    return Result(
        quantity=quantity,
        chain=setting.chain,
        at_hz=at_hz,
        name=values.get("name", ""),
        revision=session.label,
        entry=session.entry.path,
        line=place.line,
        block=session.block.kind,
        basis=MEASURED,
        value=equal.value,
        unit=read.unit,
        better=better or (known.better if known else "neither"),
        parts={**equal.parts, **read.parts} or None,
        conditions=setting.conditions,
        shown=read.value,
        corrections=equal.corrections,
        bound=equal.bound,
        notes=(*read.notes, *equal.notes, *overdue_note(setting), *_far_note(quantity, at_hz, setting)),
        read_as=read.words,
        repeats=value.repeats,
        noise_ratio=1.0 if bench is None else bench.noise_ratio,
    )


def derived(
    quantity: str,
    value: float,
    unit: str,
    parts: Parts | None,
    setting: Setting,
    place: Place,
    *,
    at_hz: float | None = None,
    name: str | None = None,
    better: Better | None = None,
    words: str = "",
    notes: tuple[str, ...] = (),
) -> Result:
    """A number that was computed from what was read; on a revision that is only planned it is a prediction."""
    session, known = setting.session, known_quantity(quantity)
    planned = session.revision is not None and session.revision.state == PLANNED
    return Result(
        quantity=quantity,
        chain=setting.chain,
        at_hz=at_hz,
        name=setting.values.get("name", "") if name is None else name,
        revision=session.label,
        entry=session.entry.path,
        line=place.line,
        block=session.block.kind,
        basis=PREDICTED if planned else DERIVED,
        value=float(value),
        unit=unit,
        better=better or (known.better if known else "neither"),
        parts={source: float(part) for source, part in (parts or {}).items() if part} or None,
        conditions=setting.conditions,
        words=words,
        notes=(*notes, *overdue_note(setting)),
        noise_ratio=1.0 if setting.bench is None else setting.bench.noise_ratio,
    )


# A frequency further from the chain's signal than this factor is as a rule a slip in the prefix.
_FAR = 50.0


def _far_note(quantity: str, at_hz: float | None, setting: Setting) -> tuple[str, ...]:
    """A note when what the chain does was read at a frequency that cannot well be its signal's."""
    chain = setting.session.chains.get(setting.chain)
    if at_hz is None or chain is None or quantity not in TOTAL_UNITS:
        return ()
    if 1 / _FAR <= at_hz / chain.signal_hz <= _FAR:
        return ()
    here, signal = show_frequency(at_hz), show_frequency(chain.signal_hz)
    return (f"read at {here}, and the signal of chain {chain.name} is at {signal}: is the prefix right?",)


def overdue_note(setting: Setting) -> tuple[str, ...]:
    """A note when the bench's calibration was due before the entry's date."""
    bench = setting.bench
    if bench is None or not bench.overdue(setting.session.entry.date):
        return ()
    return (f"read after the calibration of bench {bench.name} was due ({bench.due})",)


def fresh(place: Place, quantity: str, what: str = "reading") -> Source:
    """The source of a doubt that no other reading shares."""
    return Source("fresh", f"{place.file}:{place.line}", quantity, what)


@dataclass(frozen=True, slots=True)
class _Read:
    """What an instrument showed, in a base unit, with what a detector's calibration adds to the doubt."""

    value: float
    u: float | None
    unit: str
    parts: dict[Source, float]
    notes: tuple[str, ...] = ()
    words: str = ""


def _in_base(value: Quantity, known: KnownQuantity | None, setting: Setting, place: Place) -> _Read | None:
    detector = setting.values.get("through_detector")
    if known is None or known.dimension != "level":
        return _Read(value.value, value.u, value.unit, {})
    if detector is not None:
        return _through_detector(value, detector, setting, place)
    if value.dimension == "divisions":
        message = f"'{value.written}' is read in divisions; a level needs the detector that they were read through."
        hint = "Add 'through_detector:' with the name of a staircase."
        setting.session.fault(place, "detector", message, hint)
        return None
    dbm, u = level_dbm(value, impedance_of(setting.chain, setting.session))
    return _Read(dbm, u, "dBm", {})


def _through_detector(value: Quantity, name: str, setting: Setting, place: Place) -> _Read | None:
    """A voltage, or divisions, turned into a level by the detector's latest staircase up to this entry."""
    session = setting.session
    found = [each.outcome.data for each in session.earlier.get(("staircase", name), ())]
    calibrations = [each for each in found if isinstance(each, Calibration)]
    if not calibrations:
        known = [which for kind, which in session.earlier if kind == "staircase" and which]
        message = f"No detector '{name}' was calibrated by a staircase up to here."
        hint = did_you_mean(name, known) if known else "Write the staircase ahead of what is read through it."
        session.fault(setting.values.place("through_detector"), "unknown-detector", message, hint, name)
        return None
    detector = calibrations[-1]
    if value.dimension != detector.dimension:
        message = f"'{value.written}' is not in {detector.unit}, in which detector '{name}' answers."
        session.fault(place, "detector", message)
        return None
    level, parts, notes = detector.level(value, fresh(place, "detector", "departure from its line"))
    u = None if value.u is None else abs(value.u / detector.fit.slope)
    return _Read(level, u, "dBm", parts, notes, f"{value.written} through detector {name}")


def bears(
    shown: float,
    at_unit: float,
    known: KnownQuantity | None,
    conditions: Conditions,
    bench: Bench | None,
    place: Place,
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
        would, bears_most = show_value(found, "dBm"), show_value(most, "dBm")
        message = f"With this reading {name} would get {would}; it bears {bears_most} at most."
        hint = "Caution: switch off, and put more loss ahead of it before you read again."
        session.fault(place, "overload", message, hint)
    return not over
