"""A revision's chains: inherited from the parent, written in full, or changed step by step."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from typing import Any

from logbook.hardware import Chain, Step, apply_steps, same_hardware
from logbook.kinds.change import Change
from logbook.model import Block, Entry
from logbook.problems import Place, Problems
from logbook.revision import Alternative, Made, Revision
from logbook.stage_fields import stage_sound


def make_chains(
    entry: Entry,
    revision: Revision,
    revisions: Mapping[str, Revision],
    declared: Iterable[tuple[Block, list[Any]]],
    problems: Problems,
) -> None:
    """Give the revision its chains. What cannot be made is left out and marked broken; its faults are in `problems`."""
    parent = revisions.get(revision.comes_from or "")
    first = not revision.made and not revision.chains
    if first and parent is not None:
        revision.chains.update(parent.chains)
        revision.broken |= parent.broken
    for block, found in declared:
        if not found:
            revision.broken.add("*")
        for each in found:
            name = each.name if isinstance(each, Chain) else each.chain
            if _claimed(name, revision, block, entry, problems):
                continue
            if isinstance(each, Chain):
                before = parent.chains.get(name) if parent is not None else None
                revision.chains[name] = each if before is None else same_hardware(before, each)
                revision.broken.discard(name)
                revision.made[name] = Made(full=True, entry=entry.path, line=block.line)
            else:
                _change(each, block, revision, parent, problems)


def _claimed(name: str, revision: Revision, block: Block, entry: Entry, problems: Problems) -> bool:
    """A label's chain is made once; a second claim is a fault that names the first."""
    made = revision.made.get(name)
    if made is None:
        return False
    where = "above in this entry" if made.entry == entry.path else f"by {made.entry}"
    message = f"Chain '{name}' of revision '{revision.label}' was made already {where} (line {made.line})."
    hint = "Give this state of the hardware a label of its own."
    problems.add(block.place, "made-twice", message, hint)
    return True


def _change(change: Change, block: Block, revision: Revision, parent: Revision | None, problems: Problems) -> None:
    name = change.chain
    revision.made[name] = Made(change.steps, change.why, False, change.as_planned, block.entry, block.line)
    before = parent.chains.get(name) if parent is not None else None
    if before is None:
        if not revision.broken and (parent is None or not parent.broken):
            message = f"There is no chain '{name}' before this change."
            problems.add(change.values.place("chain"), "no-chain", message, "Write it as a chain block.", about=name)
        revision.chains.pop(name, None)
        revision.broken.add(name)
        return
    steps = change.steps
    if change.as_planned:
        planned = revision.planned.made.get(name) if revision.planned is not None else None
        if planned is None:
            message = f"No planned entry holds a change of chain '{name}' under the label '{revision.label}'."
            problems.add(change.values.place("as_planned"), "no-plan", message, about=revision.label)
            revision.broken.add(name)
            return
        steps = planned.steps
        revision.made[name] = Made(steps, change.why or planned.why, False, True, block.entry, block.line)
    after = checked(apply_steps(before, steps, problems), steps, change.values.start, problems)
    if after is None:
        revision.chains.pop(name, None)
        revision.broken.add(name)
        return
    revision.chains[name] = after
    for each in change.what_if:
        chain = checked(apply_steps(before, each.steps, problems), each.steps, change.values.start, problems)
        if chain is not None:
            chains = {**(parent.chains if parent is not None else {}), name: chain}
            revision.alternatives.append(Alternative(each.name, name, chains, each.steps, each.cost, each.currency))


def checked(chain: Chain | None, steps: Sequence[Step], place: Place, problems: Problems) -> Chain | None:
    """The chain, if its lineup still holds after the steps, every gain is known and every stage makes sense."""
    if chain is None:
        return None
    names = chain.stage_names
    lineup = chain.lineup
    for stage in chain.stages:
        known = "gain" in stage.parameters or stage.response is not None
        if not known and (lineup is None or lineup.adjust != stage.name):
            message = f"Nothing says where in its range the gain of stage '{stage.name}' stands."
            problems.add(stage.place, "missing-key", message, "Give it a 'gain:'.")
            return None
        if not stage_sound(stage, _last_step(stage.name, steps, place), problems):
            return None
    if lineup is None:
        return chain
    lost = [name for name in (lineup.adjust, lineup.at) if name not in names]
    if lost or names.index(lineup.adjust) >= names.index(lineup.at):
        what = f"stage '{lost[0]}' is gone" if lost else f"'{lineup.adjust}' no longer stands ahead of '{lineup.at}'"
        message = f"The lineup of chain '{chain.name}' cannot be kept by these steps: {what}."
        at = _last_step(lost[0] if lost else lineup.adjust, steps, place)
        problems.add(at, "lineup", message, "Write the changed chain in full, as a chain block.")
        return None
    return chain


def _last_step(name: str, steps: Sequence[Step], place: Place) -> Place:
    """Where the last step stands that touches a stage; `place` where none does."""
    return next((step.place for step in reversed(steps) if step.name == name), place)
