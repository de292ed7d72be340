"""Which revision an entry speaks of: labels are built once, plans may be built later, trials have no children."""

from __future__ import annotations

from dataclasses import dataclass, field

from logbook.model import BUILT, PLANNED, TRIAL, Entry
from logbook.problems import Place, Problems, did_you_mean
from logbook.revision import Revision

MAKING = ("chain", "change")


@dataclass(slots=True)
class Labels:
    """Resolves the labels of entries in their order; `revisions` grows on the way."""

    revisions: dict[str, Revision]
    problems: Problems
    latest_built: str | None = None
    _broken: set[str] = field(default_factory=set)

    def revision_for(self, entry: Entry) -> Revision | None:
        """The revision that an entry builds or speaks of; None with a fault, or when none is built yet."""
        if entry.revision is None:
            return self._unnamed(entry)
        known = self.revisions.get(entry.revision)
        if known is None:
            return self._new(entry, entry.revision)
        if known.state == PLANNED and _makes(entry) and entry.state != PLANNED:
            return self._build_plan(entry, known)
        return self._another(entry, known)

    def _unnamed(self, entry: Entry) -> Revision | None:
        if "revision" in entry.places:
            # A label is written and cannot be used: that is reported already, and nothing is missing.
            return None
        making = next((block for block in entry.blocks if block.kind in MAKING), None)
        if making is not None:
            message = f"A {making.kind} block makes a revision, and this entry's front matter names none."
            self.problems.add(making.place, "no-revision", message, "Add 'revision: B' to the front matter.")
            return None
        for key in ("from", "state"):
            if key in entry.places:
                message = f"'{key}' in the front matter needs a 'revision' to belong to."
                self.problems.add(entry.places[key], "no-revision", message)
        return self.revisions.get(self.latest_built or "")

    def _new(self, entry: Entry, label: str) -> Revision | None:
        if not _makes(entry) and "from" not in entry.places and self.revisions and entry.state == BUILT:
            message = f"Nothing makes revision '{label}': there is no chain or change block, and no 'from'."
            hint = did_you_mean(label, self.revisions)
            self.problems.add(entry.places["revision"], "unknown-revision", message, hint, about=label)
            return None
        sound, parent = self._parent(entry, label)
        if not sound:
            self._broken.add(label)
        return self._enter(entry, Revision(label, parent, entry.state, entry.date.isoformat(), entry.path), sound)

    def _build_plan(self, entry: Entry, plan: Revision) -> Revision:
        sound, parent = self._parent(entry, plan.label)
        made = Revision(plan.label, parent, entry.state, entry.date.isoformat(), entry.path, planned=plan)
        return self._enter(entry, made, sound)

    def _enter(self, entry: Entry, revision: Revision, sound: bool) -> Revision:
        if not sound:
            revision.broken.add("*")
        # A plan that is built takes its place in the order of building.
        self.revisions.pop(revision.label, None)
        self.revisions[revision.label] = revision
        if entry.state == BUILT:
            self.latest_built = revision.label
        return revision

    def _parent(self, entry: Entry, label: str) -> tuple[bool, str | None]:
        written = entry.comes_from
        if written is None:
            return True, self.latest_built
        place = entry.places["from"]
        parent = self.revisions.get(written)
        if written == label:
            self.problems.add(place, "cycle", f"Revision '{label}' cannot come from itself.")
            return False, None
        if parent is None:
            message = f"'{written}' is no revision made before this entry."
            self.problems.add(place, "unknown-revision", message, did_you_mean(written, self.revisions), about=written)
            return False, None
        return self._may_inherit(entry, parent, place), written

    def _may_inherit(self, entry: Entry, parent: Revision, place: Place) -> bool:
        if parent.state == TRIAL:
            message = f"Revision '{parent.label}' is a trial, and nothing inherits from a trial."
            self.problems.add(place, "from-trial", message, "Build it under a label of its own first.")
            return False
        if parent.state == PLANNED and entry.state != PLANNED:
            message = f"Revision '{parent.label}' is planned and not built; what is built cannot come from it."
            self.problems.add(place, "from-planned", message)
            return False
        return True

    def _another(self, entry: Entry, known: Revision) -> Revision | None:
        """A further entry of a revision that is there already."""
        if "from" in entry.places and entry.comes_from != known.comes_from and entry.comes_from is not None:
            message = f"Revision '{known.label}' comes from '{known.comes_from}', as {known.entry} has it."
            if self._leads_back(entry.comes_from, known.label):
                message = f"'{entry.comes_from}' itself comes from '{known.label}': a circle of parents."
                self.problems.add(entry.places["from"], "cycle", message)
            else:
                self.problems.add(entry.places["from"], "from-differs", message)
        if "state" in entry.places and entry.state != known.state:
            message = f"Revision '{known.label}' is {known.state}, as {known.entry} has it, and not {entry.state}."
            self.problems.add(entry.places["state"], "state-differs", message)
            return known
        return known

    def _leads_back(self, label: str, to: str) -> bool:
        seen: set[str] = set()
        current: str | None = label
        while current is not None and current not in seen:
            if current == to:
                return True
            seen.add(current)
            found = self.revisions.get(current)
            current = found.comes_from if found is not None else None
        return False


def _makes(entry: Entry) -> bool:
    return any(block.kind in MAKING for block in entry.blocks)
