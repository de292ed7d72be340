"""Why a text is no quantity: one fault, in plain words, with what to write instead."""

from __future__ import annotations

import re

from logbook.units import DIMENSIONS, Unit, likely_unit

_DIGITS = r"(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)"
_NUMBER = re.compile(rf"\s*[+-]?\s*{_DIGITS}(?:\([0-9.]*\))?(?:[eE][+-]?[0-9]+)?")
_COMMA = re.compile(r"(?<=[0-9]),(?=[0-9])")
_THOUSANDS = re.compile(r"[0-9]{1,3}(?:,[0-9]{3})+(?![0-9,])(?=\.[0-9]|.*)")
_GROUPED = re.compile(r"(?<=[0-9])[\s_'](?=[0-9])")
_WORD = re.compile(r"\s*[+-]?\.?(nan|inf|infinity)\b", re.IGNORECASE)


# Keys that are no nouns: "an at is a frequency" is no sentence; "a settings is a ratio" is none either.
_NO_NOUNS = frozenset({"at", "of", "reads", "drives"})


class QuantityError(ValueError):
    """A text that is no quantity of the wanted dimension; `offset` counts characters from the text's start."""

    def __init__(self, code: str, message: str, hint: str = "", offset: int = 0) -> None:
        super().__init__(message)
        self.code = code
        self.message = message
        self.hint = hint
        self.offset = offset


def _article(what: str) -> str:
    spoken = what[:1].lower()
    spelt = not re.search(r"[aeiouy]", what.split(" ")[0].lower())
    return "an" if spoken in "aeio" or (spelt and spoken in "fhlmnrsx") else "a"


def expected(wanted: tuple[str, ...], what: str) -> str:
    """`a gain is a ratio, such as '12 dB'`; without a noun, `here a ratio is expected, such as '12 dB'`."""
    nouns = " or ".join(DIMENSIONS[name].noun for name in wanted)
    example = DIMENSIONS[wanted[0]].example
    alike = any(f"{_article(what)} {what}" == DIMENSIONS[name].noun for name in wanted)
    if what in _NO_NOUNS or alike or re.search(r"[^su]s$", what):
        return f"'{what}' takes {nouns}, such as '{example}'"
    if what:
        return f"{_article(what)} {what} is {nouns}, such as '{example}'"
    return f"here {nouns} is expected, such as '{example}'"


def wrong_dimension(text: str, unit: Unit, wanted: tuple[str, ...], what: str, offset: int) -> QuantityError:
    """A sound quantity of another dimension."""
    noun = DIMENSIONS[unit.dimension].noun
    if not unit.symbol:
        return no_unit(text, wanted, what, offset)
    return QuantityError("dimension", f"'{text}' is {noun}; {expected(wanted, what)}.", "", offset)


def no_unit(text: str, wanted: tuple[str, ...], what: str, offset: int) -> QuantityError:
    """A number alone where a unit belongs."""
    return QuantityError("no-unit", f"'{text}' has no unit; {expected(wanted, what)}.", _units_here(wanted), offset)


def unknown_unit(text: str, unit: str, wanted: tuple[str, ...], what: str, offset: int) -> QuantityError:
    """A unit that is not in the table."""
    likely = likely_unit(unit, wanted)
    message = f"'{unit}' in '{text}' is no known unit; {expected(wanted, what)}."
    hint = f"Did you mean '{likely}'?" if likely else _units_here(wanted)
    if likely and likely.lower() == unit.lower():
        hint += " Upper and lower case differ."
    return QuantityError("unknown-unit", message, hint, offset)


def _units_here(wanted: tuple[str, ...]) -> str:
    usual = [symbol for name in wanted for symbol in DIMENSIONS[name].usual]
    return f"Units here: {', '.join(dict.fromkeys(usual))}."


def not_finite(text: str, offset: int) -> QuantityError:
    """nan, inf, or a number so large that it becomes inf."""
    message = f"'{text}' is no finite number; a quantity needs one."
    return QuantityError("not-finite", message, "Leave the key out where the value is not known.", offset)


def bad_uncertainty(text: str, why: str, hint: str, offset: int) -> QuantityError:
    """A number whose uncertainty cannot be used."""
    return QuantityError("uncertainty", f"The uncertainty in '{text}' {why}.", hint, offset)


def unreadable(text: str, plain: str, wanted: tuple[str, ...], what: str, correct: re.Pattern[str]) -> QuantityError:
    """The fault of a text that does not have the form of a quantity; `plain` is the text with ASCII signs."""
    written = text.strip()
    if not written:
        return QuantityError("number", f"Nothing is written here; {expected(wanted, what)}.")
    start = len(text) - len(text.lstrip())
    if _WORD.match(plain):
        return not_finite(written, start)
    return (
        _with_comma(written, plain, start, correct)
        or _grouped(written, plain, start, correct)
        or _around_number(written, plain, wanted, what, start)
    )


def _with_comma(written: str, plain: str, start: int, correct: re.Pattern[str]) -> QuantityError | None:
    comma = _COMMA.search(plain)
    if not comma:
        return None
    pointed = _COMMA.sub(".", plain.strip())
    joined = _COMMA.sub("", plain.strip())
    if correct.fullmatch(pointed):
        hint = f"Write '{pointed}'."
        if _THOUSANDS.search(plain):
            hint = f"Write '{pointed}', or '{joined}' if thousands were meant."
    elif correct.fullmatch(joined):
        hint = f"Write '{joined}'."
    else:
        hint = "Write a decimal point, and no separators of thousands."
    return QuantityError("decimal-comma", f"'{written}' holds a decimal comma.", hint, comma.start())


def _grouped(written: str, plain: str, start: int, correct: re.Pattern[str]) -> QuantityError | None:
    joined = _GROUPED.sub("", plain.strip())
    if joined == plain.strip() or not correct.fullmatch(joined):
        return None
    return QuantityError("number", f"'{written}' has separators within a number.", f"Write '{joined}'.", start)


def _around_number(written: str, plain: str, wanted: tuple[str, ...], what: str, start: int) -> QuantityError:
    number = _NUMBER.match(plain)
    if number is None:
        return QuantityError(
            "number", f"'{written}' does not begin with a number; {expected(wanted, what)}.", "", start
        )
    rest = plain[number.end() :]
    signs = re.search(r"\u00b1|\+/-", rest)
    if signs:
        hint = "Write it as '-96.4 \u00b1 0.6 dBm (k=2)', '18 \u00b1 0.5 dB' or '-96.4(3) dBm'."
        why = "is negative" if re.match(r"\s*-", rest[signs.end() :]) else "cannot be read"
        return bad_uncertainty(written, why, hint, number.end() + signs.start())
    if rest.startswith("("):
        hint = "Write digits alone between the brackets, as in '-96.4(3) dBm'."
        return bad_uncertainty(written, "cannot be read", hint, number.end())
    offset = number.end() + len(rest) - len(rest.lstrip())
    message = f"'{rest.strip()}' in '{written}' cannot be read as a unit; {expected(wanted, what)}."
    return QuantityError("trailing-text", message, "One number and one unit stand in a quantity, nothing else.", offset)
