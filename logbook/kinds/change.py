"""`change`: what is done to a chain, making a revision out of its parent."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from logbook.fields import Asked, Field, flag, many, mapping, quantity, read_mapping, text
from logbook.hardware import Chain, Step
from logbook.kind import Kind, Outcome, Session, View
from logbook.kinds._response import read_response
from logbook.model import PLANNED, Block, Values
from logbook.pieces import Piece
from logbook.problems import did_you_mean
from logbook.stage_fields import PARAMETER_FIELDS, STAGE_FIELDS, StageMaker
from logbook.yaml_nodes import Mapping, Node

_ACTIONS = {
    "insert": (Field("insert", mapping(*STAGE_FIELDS), True), Field("after", text()), Field("before", text())),
    "replace": (Field("replace", text(), True), Field("with", mapping(*STAGE_FIELDS), True)),
    "set": (Field("set", text(), True), Field("to", mapping(*PARAMETER_FIELDS), True)),
    "remove": (Field("remove", text(), True),),
}


def _step(node: Node, asked: Asked) -> Values | None:
    """One step, read by the keys of its own action."""
    keys = [key.text for key, _ in node.pairs] if isinstance(node, Mapping) else []
    actions = [key for key in keys if key in _ACTIONS]
    if len(actions) != 1:
        _no_step(node, keys, actions, asked)
        return None
    return read_mapping(node, _ACTIONS[actions[0]], Asked(f"step '{actions[0]}'", asked.problems))


def _no_step(node: Node, keys: list[str], actions: list[str], asked: Asked) -> None:
    hint = did_you_mean(keys[0], _ACTIONS) if keys else ""
    if actions:
        written = "'" + "' and '".join(actions) + "' stand in one step"
    else:
        written = f"'{keys[0]}' begins no step" if keys else "This is no step"
    message = f"{written}; a step does one thing: insert, replace, set or remove."
    asked.fault(
        node.place, "step", message, hint if hint.startswith("Did") and not actions else "Such as '- remove: pad'."
    )


STEPS = Field("steps", many(_step))

FIELDS = (
    Field("chain", text()),
    Field("why", text()),
    STEPS,
    Field("as_planned", flag()),
    Field(
        "what_if",
        many(
            mapping(
                Field("name", text(), required=True, help="A few words that name the alternative."),
                Field("steps", many(_step), required=True),
                Field("parts", quantity("price", not_negative=True)),
                Field("why", text()),
            )
        ),
        help="Alternatives to weigh, each with its steps; in a planned revision.",
    ),
)

EXAMPLE = """\
chain: rx
why: raise the gain ahead of the detector so that it sets less of the noise floor
steps:
  - insert: {name: post-amp, gain: 11.5 dB, nf: 3.2 dB, oip3: 24 dBm}
    after: mixer
  - set: lna
    to: {gain: 17.2 dB}
"""


@dataclass(frozen=True, slots=True)
class WhatIf:
    """An alternative as written in a plan."""

    name: str
    steps: tuple[Step, ...]
    cost: float | None
    currency: str
    why: str


@dataclass(frozen=True, slots=True)
class Change:
    """A change as written: its steps, or as planned."""

    chain: str
    why: str
    steps: tuple[Step, ...]
    as_planned: bool
    what_if: tuple[WhatIf, ...]
    values: Values


def declare(values: Values, session: Session) -> Change | None:
    """The change as written, for the chain of the parent revision; None with a fault."""
    name = session.chain_name(values)
    if name is None:
        return None
    planned = values.get("as_planned", False)
    if planned == ("steps" in values) and "what_if" not in values:
        message = "A change needs either 'steps' or 'as_planned: true'" + (", not both." if planned else ".")
        session.fault(values.start, "missing-key", message)
        return None
    if "what_if" in values and session.entry.state != PLANNED:
        message = "'what_if' weighs alternatives of a plan; this entry's revision is not planned."
        session.fault(values.place("what_if"), "what-if", message, "Add 'state: planned' to the front matter.")
        return None
    steps = _steps(values.get("steps", ()), name, session)
    alternatives = _alternatives(values.get("what_if", ()), name, session)
    if steps is None or alternatives is None:
        return None
    return Change(name, values.get("why", ""), steps, planned, alternatives, values)


def _alternatives(written: tuple[Values, ...], chain: str, session: Session) -> tuple[WhatIf, ...] | None:
    found: list[WhatIf] = []
    for each in written:
        steps = _steps(each["steps"], chain, session)
        if steps is None:
            return None
        cost = each.get("parts")
        found.append(
            WhatIf(
                name=each["name"],
                steps=steps,
                cost=None if cost is None else cost.value,
                currency="" if cost is None else cost.unit,
                why=each.get("why", ""),
            )
        )
    return tuple(found)


def _steps(written: tuple[Values, ...], chain: str, session: Session) -> tuple[Step, ...] | None:
    parent: Chain | None = session.chains.get(chain)
    impedance = parent.impedance_ohm if parent is not None else 50.0
    maker = StageMaker(chain, session.label, impedance, session.problems, lambda f, p: read_response(f, p, session))
    found = [_one(values, maker, session) for values in written]
    return None if any(step is None for step in found) else tuple(step for step in found if step is not None)


def _one(values: Values, maker: StageMaker, session: Session) -> Step | None:
    action: Any = next(name for name in _ACTIONS if name in values)
    if action == "remove":
        return Step("remove", values["remove"], values.place("remove"))
    if action == "insert":
        return _insert(values, maker, session)
    replaces = action == "replace"
    stage = maker.stage(values["with"]) if replaces else maker.stage(values["to"], name=values["set"])
    return None if stage is None else Step(action, values[action], values.place(action), stage)


def _insert(values: Values, maker: StageMaker, session: Session) -> Step | None:
    where = [key for key in ("after", "before") if key in values]
    if len(where) != 1:
        message = "An inserted stage stands either 'after:' or 'before:' one that is there."
        session.fault(values.start, "step", message)
        return None
    stage = maker.stage(values["insert"])
    if stage is None:
        return None
    key = where[0]
    return Step("insert", stage.name, stage.place, stage, values[key], values.place(key), before=key == "before")


def show(block: Block, outcome: Outcome, view: View) -> list[Piece]:
    """What was done and what it is predicted to do; what shows it is imported only where pages are made."""
    from logbook.showing.chains import show_change

    return show_change(block, outcome, view)


MORE = """\
A step is one of `- insert: {...}` with `after:` or `before:`, `- replace: NAME` with `with: {...}`, `- set: NAME` with
`to: {...}`, and `- remove: NAME`. In an entry with `state: planned` a `what_if` list holds alternatives; the page ranks
them, and `parts` is what each costs. An alternative stands instead of `steps`, not on top of them:

```yaml
what_if:
  - name: stronger mixer
    steps:
      - replace: mixer
        with: {name: mixer, gain: -6 dB, nf: 6.5 dB, iip3: 20 dBm, lo: 71.5 MHz}
    parts: 38.50 EUR
```

When the plan is built, write `as_planned: true` instead of `steps` under the same label. To build an alternative, write
its steps.
"""

KIND = Kind(
    word="change",
    title="Change",
    about="What is done to a chain: stages inserted, replaced, set or removed. A plan may weigh several ways.",
    fields=FIELDS,
    example=EXAMPLE,
    needs_revision=True,
    declare=declare,
    show=show,
    more=MORE,
)
