"""A Touchstone file taken apart: option line, keywords, and the lines that hold numbers."""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import dataclass, field

from logbook.problems import did_you_mean
from logbook.traces.text import Faults, is_number, quoted, word_column

_UNITS = {"hz": 1.0, "khz": 1e3, "mhz": 1e6, "ghz": 1e9}
_PARAMETERS = ("s", "y", "z", "g", "h")
_FORMS = ("ri", "ma", "db")
_KEYWORD = re.compile(r"\[\s*([^\]]*?)\s*\]\s*(.*)")
_WHOLE = re.compile(r"[0-9]{1,7}")


@dataclass(slots=True)
class Head:
    """What a file says of itself; the defaults are those of a missing option line."""

    factor: float = 1e9
    form: str = "ma"
    reference: list[float] = field(default_factory=list)
    keyed: bool = False
    ports: int | None = None
    two_port_order: str = ""
    matrix: str = "full"
    frequencies: tuple[int, int] | None = None
    """How many there should be, and the line that says so."""
    numbers: list[int] = field(default_factory=list)
    """The lines that hold the network data, and beneath what they hold, without comments."""
    texts: list[str] = field(default_factory=list)


class Scanner:
    """Goes through the lines of a file once and fills a `Head`."""

    def __init__(self, faults: Faults) -> None:
        self.head = Head()
        self._faults = faults
        self._section = "data"
        self._option_seen = False
        self._seen: set[str] = set()
        self._keywords: dict[str, Callable[[int, str, str], None]] = {
            "version": self._version,
            "number of ports": self._ports,
            "two-port data order": self._order,
            "two-port order": self._order,
            "number of frequencies": self._frequencies,
            "number of noise frequencies": self._nothing,
            "reference": self._reference,
            "matrix format": self._matrix,
            "mixed-mode order": self._mixed,
            "begin information": self._section_named("information"),
            "end information": self._section_named("head"),
            "network data": self._section_named("data"),
            "noise data": self._section_named("noise"),
            "end": self._section_named("end"),
        }

    def scan(self, lines: list[str]) -> Head:
        """The head, and the lines of the network data."""
        for number, line in enumerate(lines, 1):
            text = line.partition("!")[0] if "!" in line else line
            if not text or text.isspace():
                continue
            if ("#" in text or "[" in text) and text.lstrip()[0] in "#[":
                self._special(number, text)
            elif self._section == "data":
                self.head.numbers.append(number)
                self.head.texts.append(text)
            else:
                self._outside(number, text)
        return self.head

    def _special(self, number: int, text: str) -> None:
        if text.lstrip().startswith("#"):
            if self._section not in ("information", "end"):
                self._option_line(number, text)
            return
        match = _KEYWORD.match(text.lstrip())
        name = " ".join(match[1].lower().split()) if match else ""
        if self._section == "end" or (self._section == "information" and name != "end information"):
            return
        column = word_column(text, 0)
        if match is None or name not in self._keywords:
            hint = did_you_mean(name, self._keywords) if name else "Close the bracket."
            self._faults.add(number, column, "keyword", f"{quoted(text)} is no keyword of Touchstone 2.0.", hint)
            return
        if name in self._seen:
            self._faults.add(number, column, "keyword", f"'[{match[1]}]' stands here a second time.")
            return
        self._seen.add(name)
        self._keywords[name](number, text, match[2].strip())

    def _outside(self, number: int, text: str) -> None:
        """Numbers outside of the network data: a reference that goes on, or a file in disorder."""
        if self._section == "reference":
            self._reference(number, text, text)
        elif self._section == "head":
            message = f"{quoted(text)} stands ahead of the data."
            self._faults.add(number, word_column(text, 0), "keyword", message, "Begin the data with [Network Data].")

    def _section_named(self, name: str) -> Callable[[int, str, str], None]:
        def enter(number: int, text: str, value: str) -> None:
            self._section = name

        return enter

    def _nothing(self, number: int, text: str, value: str) -> None:
        self._section = "head"

    def _bad(self, number: int, text: str, value: str, code: str, expected: str) -> None:
        column = len(text.rstrip()) - len(value) + 1
        self._faults.add(number, column, code, f"{quoted(value)} is not {expected}.")

    def _version(self, number: int, text: str, value: str) -> None:
        self._section = "head"
        self.head.keyed = True
        if value not in ("2.0", "2.1"):
            self._bad(number, text, value, "version", "a version with keywords; 2.0 is")

    def _ports(self, number: int, text: str, value: str) -> None:
        self._section = "head"
        if _WHOLE.fullmatch(value) and 0 < int(value) < 1000:
            self.head.ports = int(value)
        else:
            self._bad(number, text, value, "ports", "a number of ports")

    def _order(self, number: int, text: str, value: str) -> None:
        self._section = "head"
        if value in ("12_21", "21_12"):
            self.head.two_port_order = value
        else:
            self._bad(number, text, value, "keyword", "an order of two-port data; 12_21 and 21_12 are")

    def _frequencies(self, number: int, text: str, value: str) -> None:
        self._section = "head"
        if _WHOLE.fullmatch(value) and int(value) > 0:
            self.head.frequencies = int(value), number
        else:
            self._bad(number, text, value, "count", "a number of frequencies")

    def _reference(self, number: int, text: str, value: str) -> None:
        if self._section != "reference":
            # The values here stand in place of the option line's.
            self.head.reference = []
        self._section = "reference"
        for word in value.split():
            self._resistance(number, text, word)

    def _resistance(self, number: int, text: str, word: str) -> None:
        if is_number(word) and 0 < float(word) < 1e30:
            self.head.reference.append(float(word))
        else:
            column = text.rfind(word) + 1
            message = f"{quoted(word)} is not a reference resistance in ohm."
            self._faults.add(number, column, "reference", message)

    def _matrix(self, number: int, text: str, value: str) -> None:
        self._section = "head"
        if value.lower() in ("full", "lower", "upper"):
            self.head.matrix = value.lower()
        else:
            self._bad(number, text, value, "keyword", "a matrix format; Full, Lower and Upper are")

    def _mixed(self, number: int, text: str, value: str) -> None:
        self._section = "head"
        message = "The data are of common and differential modes; only those of single ports are read."
        self._faults.add(number, word_column(text, 0), "parameter", message, "Export the single-ended S-parameters.")

    def _option_line(self, number: int, text: str) -> None:
        """`# <unit> <parameter> <form> R <ohm>` in any order; a second option line counts for nothing (1.1)."""
        if self._option_seen:
            return
        self._option_seen = True
        if self.head.numbers:
            message = "The option line stands behind the first data."
            self._faults.add(number, word_column(text, 0), "option", message, "Put it ahead of them.")
        spaced = text.replace("#", " ", 1)
        before, r, after = self._split_at_r(spaced)
        said: set[str] = set()
        for index, word in enumerate(before):
            self._option(number, word_column(spaced, index), word, said)
        for word in after:
            self._resistance(number, spaced, word)
        if r and not after:
            message = "Behind 'R' the reference resistance is missing."
            self._faults.add(number, len(spaced.rstrip()) + 1, "option", message, "Write 'R 50'.")

    @staticmethod
    def _split_at_r(text: str) -> tuple[list[str], bool, list[str]]:
        """The words but for R and the numbers behind it, whether there is an R, and those numbers."""
        words = text.split()
        at = next((i for i, word in enumerate(words) if word.lower() == "r"), None)
        if at is None:
            return words, False, []
        end = at + 1
        while end < len(words) and words[end].lower() not in (*_UNITS, *_PARAMETERS, *_FORMS):
            end += 1
        # What stood between keeps its index, so that a column can be found.
        return [*words[:at], *[""] * (end - at), *words[end:]], True, words[at + 1 : end]

    def _option(self, number: int, column: int, word: str, said: set[str]) -> None:
        lowered = word.lower()
        if not word:
            return
        sort = "unit" if lowered in _UNITS else "parameter" if lowered in _PARAMETERS else "form"
        if sort == "form" and lowered not in _FORMS:
            hint = did_you_mean(word, ("Hz", "kHz", "MHz", "GHz", "S", "RI", "MA", "DB", "R"))
            self._faults.add(number, column, "option", f"{quoted(word)} is no option of a Touchstone file.", hint)
            return
        if sort in said:
            self._faults.add(number, column, "option", f"{quoted(word)} is a second {sort} in the option line.")
            return
        said.add(sort)
        if sort == "unit":
            self.head.factor = _UNITS[lowered]
        elif sort == "form":
            self.head.form = lowered
        elif lowered != "s":
            message = f"The file holds {word.upper()}-parameters; only S-parameters are read."
            self._faults.add(number, column, "parameter", message, "Export the S-parameters.")
