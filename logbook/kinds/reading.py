"""`reading`: measured numbers with their conditions."""

from __future__ import annotations

from dataclasses import dataclass

from logbook.fields import Asked, Field, choice, named, quantity, read_mapping, text
from logbook.kind import Kind, Outcome, Session, View
from logbook.kinds._measured import likely_quantity, measured, not_on_a_plan, setting_of
from logbook.kinds._setting_fields import SETTING_FIELDS
from logbook.model import Block, Result
from logbook.pieces import Piece
from logbook.quantities import BETTER, Better, KnownQuantity, known_quantity
from logbook.quantity import Quantity
from logbook.stage_fields import LEVEL
from logbook.units import DIMENSIONS
from logbook.yaml_nodes import Node, Scalar
from logbook.yaml_nodes import Sequence as YamlSequence

# A unit of K can be meant in three ways; for a name of the user's own it is a temperature.
_ANY = tuple(name for name in DIMENSIONS if name not in ("noise_temperature", "temperature_difference"))


_BETTER = f"It says which way is better: {', '.join(BETTER)}."


@dataclass(frozen=True, slots=True)
class Given:
    """One result as written: its value, and the direction where the user states it."""

    value: Quantity
    better: Better | None


def _dimension(known: KnownQuantity | None) -> str | tuple[str, ...]:
    if known is None:
        return _ANY
    return (*LEVEL, "divisions") if known.dimension == "level" else known.dimension


def _result(node: Node, asked: Asked) -> Given | None:
    """A result: a quantity for a name that is known, a mapping with value and direction for any other."""
    known = known_quantity(asked.what)
    value = quantity(_dimension(known), repeated=True)
    if isinstance(node, Scalar | YamlSequence):
        if known is None:
            hint = likely_quantity(asked.what)
            hint = hint if hint.startswith("Did") else "A name of your own is written {value: 3.1 V, better: higher}."
            asked.fault(
                asked.key_place or node.place, "unknown-quantity", f"'{asked.what}' is no quantity known by name.", hint
            )
            return None
        found = value(node, asked)
        return None if found is None else Given(found, None)
    fields = (
        Field("value", value, required=True),
        Field("better", choice(*BETTER), required=known is None, help=_BETTER),
    )
    values = read_mapping(node, fields, Asked(f"'{asked.what}'", asked.problems))
    return None if values is None else Given(values["value"], values.get("better"))


FIELDS = (
    *SETTING_FIELDS,
    Field("through_detector", text()),
    Field("name", text()),
    Field("at", quantity("frequency", positive=True)),
    Field("drive", quantity(LEVEL)),
    Field("source_temperature", quantity("noise_temperature", positive=True)),
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
    if not not_on_a_plan("read", block.place, session):
        return Outcome()
    for values in block.items:
        setting = setting_of(values, session)
        if setting is None:
            continue
        at = values.get("at")
        for name, given in values["results"].items():
            place = values["results"].place(name)
            result = measured(name, given.value, setting, place, None if at is None else at.value, given.better)
            if result is not None:
                found.append(result)
    return Outcome(tuple(found))


def show(block: Block, outcome: Outcome, view: View) -> list[Piece]:
    """The results as read and on equal terms; what shows it is imported only where pages are made."""
    from logbook.showing.readings import show_results

    return show_results(block, outcome, view)


MORE = """\
`at` is the frequency at the chain's input, also where the output is read; `drive` is the level put in there. `through`
names the parts of the bench's path that stand between unit and instrument; with `shown_at: unit` their losses are in
the numbers already. `±` is a limit (divided by √3), a number in brackets a standard uncertainty. `through_detector`
names the `staircase` of a detector; values are then in volts or divisions.
"""

KIND = Kind(
    word="reading",
    title="Readings",
    about="Measured numbers with the conditions they were read under. Levels are what the instrument shows.",
    fields=FIELDS,
    example=EXAMPLE,
    many=True,
    needs_revision=True,
    calculate=calculate,
    show=show,
    more=MORE,
)
