"""`spurs`: what a spur is made of, which trial tells, and which choice of IF has the fewest of them."""

from __future__ import annotations

from dataclasses import dataclass, replace

from logbook.fields import Field, choice, flag, many, mapping, pair, quantity, text, whole
from logbook.kind import Kind, Outcome, Session, View
from logbook.kinds._measured import Setting, derived, measured, not_on_a_plan, setting_of
from logbook.kinds._setting_fields import AVERAGING
from logbook.kinds._spur_search import found_spur, search_of, whole_plan
from logbook.model import Block, Result, Values
from logbook.pieces import Piece
from logbook.showing.readings import show_results
from logbook.showing.spur_map import Plan, plan_pieces
from logbook.showing.spurs import Spur, sources_piece, spur_pieces
from logbook.spurs.setting import SpurSource
from logbook.stage_fields import LEVEL

_SHIFT_HELP = (
    "What was shifted (a source, or 'tuning'), by how much, and how far the spur moved: "
    "{source: clock, by: 1 kHz, seen: -3 kHz}."
)
_DROP_HELP = "By how much the input (or a source) was lowered, and how far the spur fell: {by: 10 dB, seen: 20 ± 1 dB}."

_MOVES = mapping(
    Field("source", text(), required=True, help=_SHIFT_HELP),
    Field("by", quantity("frequency"), required=True, help=_SHIFT_HELP),
    Field("seen", quantity("frequency"), required=True, help=_SHIFT_HELP),
)
_DROPS = mapping(
    Field("source", text(), help="Left out: all that comes in by the input."),
    Field("by", quantity("ratio", not_negative=True), required=True, help=_DROP_HELP),
    Field("seen", quantity("ratio"), required=True, help=_DROP_HELP),
)
_SEEN = mapping(
    Field("name", text()),
    Field("frequency", quantity("frequency", positive=True), required=True, help="Such as '50.112 MHz ± 2 kHz'."),
    Field("tolerance", quantity("frequency", not_negative=True), help="How closely the frequency was read."),
    Field("where", text(), help="'signal', the unit's own display (default), or the stage behind which it was seen."),
    Field("tuned", quantity("frequency", positive=True), help="With a stage: what the unit was tuned to meanwhile."),
    Field("level", quantity(LEVEL, repeated=True)),
    Field("moves", many(_MOVES), help=_SHIFT_HELP),
    Field("drops", many(_DROPS), help=_DROP_HELP),
    Field("note", text()),
)
_SOURCE = mapping(
    Field("name", text(), required=True, help="Such as {name: clock, frequency: 10 MHz}."),
    Field("frequency", quantity("frequency", positive=True), required=True, help="Its limits count, '600 ± 5 kHz'."),
    Field("harmonics", whole(1, 999), help="Up to which harmonic it is looked at; left out: up to 'order'."),
    Field("enters", choice("input", "inside"), help="'input' for what comes in by the antenna."),
    Field("movable", flag(), help="'false' for what nobody here can shift, such as a broadcast station."),
    Field("note", text()),
)
_AVOID = mapping(
    Field("tune", pair(quantity("frequency", positive=True)), required=True, help="Such as [50 MHz, 52 MHz]."),
    Field("if", many(quantity("frequency", positive=True)), help="The IFs to choose from; left out: the chain's own."),
    Field("side", choice("high", "low", "both"), help="The oscillator above or below the signal; left out: both."),
)

FIELDS = (
    Field("chain", text()),
    Field("sources", many(_SOURCE), help="What there is beside the chain's signal and its oscillators."),
    Field("order", whole(2, 15)),
    Field("bandwidth", quantity("frequency", positive=True), help="Of the IF; left out: the chain's narrowest stage."),
    Field("seen", many(_SEEN), help="The spurs that were seen, each with its frequency."),
    Field("avoid", _AVOID, help="A plan: which products fall into an IF over a tuning range."),
    Field("bench", text()),
    Field("through", many(text(), least=0)),
    Field("through_detector", text()),
    Field("rbw", quantity("frequency", positive=True)),
    Field("averaging", choice(*AVERAGING)),
    Field("shown_at", choice("instrument", "unit")),
    Field("note", text()),
)

EXAMPLE = """\
sources:
  - {name: clock, frequency: 25 MHz}
  - {name: reference, frequency: 10 MHz, harmonics: 20}
  - {name: switcher, frequency: 612 ± 1 kHz, harmonics: 40, note: supply of the display}
  - {name: station, frequency: 94.7 MHz, harmonics: 2, enters: input, movable: false}
order: 7
bench: shack
seen:
  - name: whistle
    frequency: 50 MHz ± 1 kHz
    level: -112.5(3) dBm
    drops: {by: 10 dB, seen: 0 ± 1 dB}
    moves:
      - {source: tuning, by: 1 kHz, seen: 1 kHz}
      - {source: reference, by: 1 kHz, seen: 0 ± 0.3 kHz}
  - name: burble
    frequency: 21.402 MHz
    tolerance: 3 kHz
    where: if-filter
    tuned: 50.098 MHz
avoid:
  tune: [50 MHz, 52 MHz]
  if: [10.7 MHz, 21.4 MHz]
  side: both
"""


@dataclass(frozen=True, slots=True)
class Report:
    """All that a block comes to beside its results."""

    spurs: tuple[Spur, ...]
    plan: Plan | None
    sources: tuple[SpurSource, ...]
    order: int


def calculate(block: Block, session: Session) -> Outcome:
    """The level of each spur that has one, its candidates, and the plan."""
    values = block.items[0]
    setting = setting_of(values, session)
    if "seen" not in values and "avoid" not in values:
        message = "A spurs block needs 'seen', the spurs that were seen, or 'avoid', a tuning range to plan for."
        session.fault(values.start, "missing-key", message)
        return Outcome()
    if setting is None or ("seen" in values and not not_on_a_plan("seen", values.place("seen"), session)):
        return Outcome()
    search = search_of(values, session.chains.get(setting.chain), session)
    results = _levels(values, setting)
    if search is None:
        return Outcome(tuple(results))
    spurs = [spur for item in values.get("seen", ()) if (spur := found_spur(item, search)) is not None]
    plan = whole_plan(values["avoid"], values, search) if "avoid" in values else None
    if plan is not None:
        results += _counts(plan, values, setting)
    return Outcome(tuple(results), Report(tuple(spurs), plan, search.sources, search.order))


def _levels(values: Values, setting: Setting) -> list[Result]:
    """The level of each spur on equal terms, under its frequency and name."""
    found: list[Result] = []
    for item in values.get("seen", ()):
        if "level" not in item:
            continue
        at = item["frequency"].value
        result = measured("spur_level", item["level"], setting, item.place("level"), at)
        if result is None:
            continue
        result = replace(result, name=item.get("name", ""))
        if any(each.key == result.key for each in found):
            message = f"Two spurs are given at {item['frequency'].written} under the same name."
            setting.session.fault(item.start, "duplicate-spur", message, "Give each a 'name:' of its own.")
            continue
        found.append(result)
    return found


def _counts(plan: Plan, values: Values, setting: Setting) -> list[Result]:
    """How many products fall into the IF of each usable choice."""
    place = values.place("avoid")
    return [
        derived(
            "spur_crossings",
            float(len(each.crossings)),
            "1",
            None,
            setting,
            place,
            name=each.key,
            better="lower",
        )
        for each in plan.choices
        if not each.why
    ]


def show(block: Block, outcome: Outcome, view: View) -> list[Piece]:
    """The levels with their deltas, the candidates of each spur, the plan, and what was combined."""
    levels = tuple(each for each in outcome.results if each.quantity == "spur_level")
    pieces = show_results(block, Outcome(levels), view)
    report = outcome.data
    if not isinstance(report, Report):
        return pieces
    for spur in report.spurs:
        pieces += spur_pieces(spur)
    if report.plan is not None:
        pieces += plan_pieces(report.plan)
    return [*pieces, sources_piece(report.sources, report.order)]


MORE = """\
A source counts up to `order`, alone or with others; give it `harmonics: 20` to let its harmonics count up to the 20th.
A candidate such as `lo − (28.6 MHz outside)` is a signal from outside at that frequency: image, half-IF or the IF.
"""

KIND = Kind(
    word="spurs",
    title="Spurs",
    about=(
        "Which products of the chain's oscillators, its signal and named sources land where a spur was seen, what the "
        "evidence leaves of them, and what to try next; and a plan for a tuning range that avoids them."
    ),
    fields=FIELDS,
    example=EXAMPLE,
    calculate=calculate,
    show=show,
    more=MORE,
)
