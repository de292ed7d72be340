"""`chain`: a signal path in full."""

from __future__ import annotations

from typing import Any

from logbook.fields import Field, choice, either, many, mapping, quantity, text
from logbook.hardware import Chain, Lineup, Parameter, Stage
from logbook.kind import Kind, Outcome, Session, View
from logbook.kinds._response import read_response
from logbook.model import Block, Source, Values
from logbook.physics.decibels import relative_from_u_db
from logbook.physics.noise import fa_to_temperature
from logbook.pieces import Piece
from logbook.quantity import Quantity, level_dbm
from logbook.stage_fields import LEVEL, STAGE_FIELDS, StageMaker

_EXTERNAL = "external_noise: 'galactic', or a figure Fa in dB as ITU-R P.372 has it"


def _external(node: Any, asked: Any) -> Any:
    if getattr(node, "text", "") == "galactic":
        return "galactic"
    return quantity("ratio")(node, asked)


FIELDS = (
    Field("chain", text(), required=True, help="The chain's name, such as 'chain: rx'."),
    Field("signal", quantity("frequency", positive=True), required=True, help="Such as 'signal: 50.1 MHz'."),
    Field("level", quantity(LEVEL)),
    Field("strongest", quantity(LEVEL)),
    Field("weakest", quantity(LEVEL)),
    Field("bandwidth", quantity("frequency", positive=True)),
    Field("impedance", quantity("resistance", positive=True)),
    Field("source_temperature", quantity("noise_temperature", not_negative=True)),
    Field("external_noise", either(_external, quantity("ratio")), help=_EXTERNAL),
    Field("snr", quantity("ratio")),
    Field(
        "lineup",
        mapping(
            Field("input", quantity(LEVEL), required=True),
            Field("at", text(), required=True),
            Field("level", quantity(LEVEL), required=True),
            Field("adjust", text(), required=True),
        ),
    ),
    Field("sums", choice("in phase", "not in phase")),
    Field("stages", many(mapping(*STAGE_FIELDS)), required=True, help="A list of stages, from input to output."),
)

EXAMPLE = """\
chain: rx
signal: 50.1 MHz
level: -60 dBm
bandwidth: 10 kHz
stages:
  - {name: preselector, loss: 1.2 dB}
  - {name: lna, gain: 18 ± 0.5 dB, nf: 1.1 ± 0.2 dB, oip3: 24 dBm, op1db: 10 dBm}
  - {name: mixer, gain: -6.5 dB, nf: 7 dB, iip3: 13 dBm, lo: 71.5 MHz, output: difference}
  - {name: if-filter, loss: 3 ± 0.5 dB, bandwidth: 12 kHz}
  - {name: detector, gain: 0 dB, noise_voltage: 1.5 nV/rtHz, termination: 50 ohm}
"""


def declare(values: Values, session: Session) -> Chain | None:
    """The chain as written."""
    name = values["chain"]
    impedance = values["impedance"].value if "impedance" in values else 50.0
    maker = StageMaker(name, session.label, impedance, session.problems, lambda f, p: read_response(f, p, session))
    stages = [stage for stage in (maker.stage(each) for each in values["stages"]) if stage is not None]
    sound = len(stages) == len(values["stages"])
    sound = _names_once(stages, session) and sound

    def whole(key: str) -> Parameter | None:
        return _whole(values.get(key), name, key, session.label, impedance)

    if "source_temperature" in values and "external_noise" in values:
        message = "'source_temperature' and 'external_noise' both say what noise enters."
        session.fault(values.place("external_noise"), "given-twice", message, "Keep one of them.")
        sound = False
    lineup = _lineup(values, stages, name, impedance, session)
    if not sound or (lineup is None and "lineup" in values) or not _adjusted(stages, lineup, session):
        return None
    return Chain(
        name=name,
        signal_hz=values["signal"].value,
        stages=tuple(stages),
        place=values.start,
        level=whole("level"),
        strongest=whole("strongest"),
        weakest=whole("weakest"),
        bandwidth_hz=whole("bandwidth"),
        impedance_ohm=impedance,
        source_temperature_k=_source(values, name, session.label, impedance),
        galactic=values.get("external_noise") == "galactic",
        snr_db=whole("snr"),
        in_phase=values.get("sums", "in phase") == "in phase",
        lineup=lineup,
    )


def _whole(found: Quantity | None, chain: str, what: str, revision: str, impedance: float) -> Parameter | None:
    return None if found is None else _given(found, chain, what, revision, impedance)


def _given(found: Quantity, chain: str, what: str, revision: str, impedance: float) -> Parameter:
    source = Source("chain", chain, "", what, revision)
    if found.dimension in LEVEL:
        value, u = level_dbm(found, impedance)
        return Parameter(value, u, source)
    return Parameter(found.value, found.u, source)


def _source(values: Values, chain: str, revision: str, impedance: float) -> Parameter | None:
    if "source_temperature" in values:
        return _whole(values["source_temperature"], chain, "source_temperature", revision, impedance)
    fa = values.get("external_noise")
    if not isinstance(fa, Quantity):
        return None
    kelvin = float(fa_to_temperature(fa.value))
    # Fa is in dB; its doubt in kelvin, first order: dT = T·ln10/10·dFa.
    u = None if fa.u is None else kelvin * float(relative_from_u_db(fa.u))
    return Parameter(kelvin, u, Source("chain", chain, "", "external_noise", revision))


def _names_once(stages: list[Stage], session: Session) -> bool:
    seen: dict[str, Stage] = {}
    sound = True
    for stage in stages:
        if stage.name in seen:
            message = f"Two stages are named '{stage.name}' (the first on line {seen[stage.name].place.line})."
            session.fault(stage.place, "duplicate-stage", message, "Give each stage a name of its own.")
            sound = False
        seen.setdefault(stage.name, stage)
    return sound


def _lineup(values: Values, stages: list[Stage], chain: str, impedance: float, session: Session) -> Lineup | None:
    found: Values | None = values.get("lineup")
    if found is None:
        return None
    names = [stage.name for stage in stages]
    before = len(session.problems)
    for key in ("at", "adjust"):
        if found[key] not in names:
            message = f"'{found[key]}' is no stage of chain '{chain}'."
            session.fault(found.place(key), "unknown-stage", message)
    if len(session.problems) > before:
        return None
    if names.index(found["adjust"]) >= names.index(found["at"]):
        message = (
            f"Stage '{found['adjust']}' does not stand ahead of '{found['at']}', so it cannot set the level there."
        )
        session.fault(found.place("adjust"), "lineup", message)
        return None
    given = [_given(found[key], chain, "lineup " + key, session.label, impedance) for key in ("input", "level")]
    return Lineup(given[0], found["at"], given[1], found["adjust"], found.start)


def _adjusted(stages: list[Stage], lineup: Lineup | None, session: Session) -> bool:
    """Every gain is known: a stage given by its range alone is the one that the lineup sets."""
    sound = True
    for stage in stages:
        known = "gain" in stage.parameters or stage.response is not None
        if not known and (lineup is None or lineup.adjust != stage.name):
            message = f"Stage '{stage.name}' gives a gain range, and nothing says where in it the gain stands."
            session.fault(stage.place, "missing-key", message, "Add 'gain:', or a 'lineup:' that adjusts this stage.")
            sound = False
    return sound


def show(block: Block, outcome: Outcome, view: View) -> list[Piece]:
    """The chain as predicted; what shows it is imported only where pages are made."""
    from logbook.showing.chains import show_chain

    return show_chain(block, outcome, view)


MORE = f"""\
Keys of a stage: {", ".join(f"`{field.name}`" for field in STAGE_FIELDS)}. A stage with `lo` is a mixer; `lo` is a
frequency, or `{{follows: signal, offset: 21.4 MHz}}`. Gain is given as `gain`, `loss`, `gain_range` (set by the
lineup) or `response` (|S21| from a `.s2p`); noise as `nf`, as `nf_dsb` on a mixer, as `noise_voltage` and
`noise_current` with `termination`, or not at all on a passive stage.

`lineup: {{input: -42 dBm, at: detector, level: -12 dBm, adjust: vga}}` solves the gain of `vga` so that -42 dBm at the
chain's input puts -12 dBm into `detector`. `snr` is the signal to noise wanted, for the sensitivity; `strongest` and
`weakest` are the signals expected; `external_noise` is `galactic`, or Fa in dB, instead of `source_temperature`.
"""

KIND = Kind(
    word="chain",
    title="Signal chain",
    about="A signal path in full: its stages in order, what enters, and in which bandwidth its noise counts.",
    fields=FIELDS,
    example=EXAMPLE,
    needs_revision=True,
    declare=declare,
    show=show,
    more=MORE,
)
