"""What is wrong in the input: where it stands, what was written, what was expected."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from typing import NamedTuple

PROBLEM = "problem"
CAUTION = "caution"

# For faults that any other fault may have caused.
ANY_FAULT = "*"


class Place(NamedTuple):
    """A spot in a file; line and column count from 1, as editors do."""

    file: str
    line: int
    column: int = 1

    def __str__(self) -> str:
        return f"{self.file}:{self.line}:{self.column}"


@dataclass(frozen=True, order=True, slots=True)
class Problem:
    """One fault: `code` is stable, `message` quotes what is there, `hint` says what to do.

    `about` names what was looked for and not found, when it may be missing only because another block is at fault.
    """

    place: Place
    code: str
    message: str
    hint: str = ""
    severity: str = PROBLEM
    about: str = ""

    def __str__(self) -> str:
        said = f"{self.message} {self.hint}".strip()
        return f"{self.place}: {said} [{self.code}]"


class Problems:
    """Collects every fault of a run; iterates over them sorted by place, each once."""

    def __init__(self) -> None:
        self._found: dict[Problem, None] = {}
        self._named: dict[str, set[Place]] = {}

    def add(
        self, place: Place, code: str, message: str, hint: str = "", severity: str = PROBLEM, about: str = ""
    ) -> None:
        """Keep one more fault; the same one said twice is kept once."""
        self._found[Problem(place, code, message, hint, severity, about)] = None

    def extend(self, problems: Iterable[Problem]) -> None:
        """Keep faults that were found elsewhere."""
        self._found.update(dict.fromkeys(problems))

    def file_named(self, file: str, place: Place) -> None:
        """Remember where a file is named, so that its own faults are shown there too."""
        self._named.setdefault(file, set()).add(place)

    def naming(self, file: str) -> Iterable[Place]:
        """Where a file is named."""
        return self._named.get(file, ())

    def within(self, file: str, first_line: int, last_line: int) -> list[Problem]:
        """The faults on these lines of a file, and those in the files that are named there, in order."""

        def there(place: Place) -> bool:
            return place.file == file and first_line <= place.line <= last_line

        named = {other for other, places in self._named.items() if other != file and any(map(there, places))}
        return sorted(p for p in self._found if there(p.place) or p.place.file in named)

    def drop(self, problems: Iterable[Problem]) -> None:
        """Forget faults that turned out to follow from others."""
        for problem in problems:
            self._found.pop(problem, None)

    def __iter__(self) -> Iterator[Problem]:
        return iter(sorted(self._found))

    def __len__(self) -> int:
        return len(self._found)


def did_you_mean(word: str, known: Iterable[str]) -> str:
    """A sentence that names the likely word, or that lists all of a short list; else nothing."""
    words = list(known)
    # Needed where something is wrong only, and slow to import.
    from difflib import get_close_matches

    close = get_close_matches(word.lower(), [w.lower() for w in words], n=1, cutoff=0.6)
    if close:
        likely = next(w for w in words if w.lower() == close[0])
        return f"Did you mean '{likely}'?"
    if words and len(words) <= 12:
        return "Known here: " + ", ".join(words) + "."
    return ""
