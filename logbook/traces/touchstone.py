"""Touchstone 1.1 and 2.0 files: S-parameters over frequency, or faults with their lines.

Source of the layout: Touchstone File Format Specification, version 2.0, IBIS Open Forum, 2009; it describes 1.1 too.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from logbook.physics.decibels import db_from_amplitude
from logbook.problems import Problems
from logbook.traces.text import Faults, is_number, quoted, read_lines, word_column
from logbook.traces.touchstone_head import Head, Scanner
from logbook.traces.trace import Trace, frozen

Floats = npt.NDArray[np.float64]

_SUFFIX = re.compile(r"\.s([0-9]{1,3})p$", re.IGNORECASE)
# Frequency, minimum noise figure, reflection of the best source as magnitude and angle, noise resistance.
_NOISE_NUMBERS = 5


@dataclass(frozen=True, slots=True, eq=False)
class Touchstone:
    """S-parameters of P ports at N rising frequencies: `frequency_hz` (N,) in Hz, `s` (N, P, P), complex.

    `s[:, i, j]` is what leaves port i+1 for what enters port j+1. `reference_ohm` holds one resistance for each port.
    """

    file: str
    frequency_hz: Floats
    s: npt.NDArray[np.complex128]
    reference_ohm: tuple[float, ...]


def read_touchstone(data: bytes, file: str, problems: Problems) -> Touchstone | None:
    """The S-parameters in a file's bytes, None with faults; `file` is the name, whose suffix tells the ports in 1.1.

    Noise data are passed over. Nothing is raised, whatever the bytes are.
    """
    with Faults(file, problems) as faults:
        lines = read_lines(data, faults)
        if lines is None:
            return None
        head = Scanner(faults).scan(lines)
        ports = _ports(head, file, faults)
        if not head.numbers:
            faults.add(len(lines), 1, "empty", "The file holds no data.")
        if ports is None or not head.numbers:
            return None
        reference = _reference(head, ports, faults)
        values = _values(head, ports, faults)
        if values is None or len(faults):
            return None
        return _assembled(file, head, ports, reference, values)


def magnitude_db(trace: Touchstone, to_port: int, from_port: int) -> Floats:
    """20 lg |S| of S<to><from>, ports from 1, in dB, (N,); nan where it is zero. Raises IndexError for no such port."""
    if not (0 < to_port <= trace.s.shape[1] and 0 < from_port <= trace.s.shape[1]):
        raise IndexError(f"S{to_port}{from_port} of {trace.s.shape[1]} ports")
    magnitude: Floats = np.abs(trace.s[:, to_port - 1, from_port - 1])
    return db_from_amplitude(magnitude)


def magnitude_trace(found: Touchstone, to_port: int, from_port: int) -> Trace:
    """`magnitude_db` as a trace in dB over Hz, named "S21" and the like."""
    name = f"S{to_port}{from_port}" if max(to_port, from_port) < 10 else f"S{to_port},{from_port}"
    return Trace(name, found.file, found.frequency_hz, "Hz", frozen(magnitude_db(found, to_port, from_port)), "dB")


def _ports(head: Head, file: str, faults: Faults) -> int | None:
    """As the file says, else as its suffix says."""
    if head.ports is not None:
        return head.ports
    suffix = _SUFFIX.search(file)
    if suffix and int(suffix[1]):
        return int(suffix[1])
    message = f"The name '{file}' does not tell how many ports there are."
    faults.add(1, 1, "ports", message, "Let it end in .s1p, .s2p and so on, or give [Number of Ports].")
    return None


def _reference(head: Head, ports: int, faults: Faults) -> tuple[float, ...]:
    given = head.reference or [50.0]
    if len(given) not in (1, ports):
        message = f"{len(given)} reference resistances are given for {ports} port{'s' if ports > 1 else ''}."
        faults.add(1, 1, "reference", message, "Give one for all, or one for each port.")
    return tuple(given) if len(given) == ports else tuple(given[:1]) * ports


def _values(head: Head, ports: int, faults: Faults) -> Floats | None:
    """(N, 1 + 2 pairs): frequency in Hz and the numbers as written; None with a fault."""
    pairs = ports * ports if head.matrix == "full" else ports * (ports + 1) // 2
    if ports == 2 and head.keyed and head.matrix == "full" and not head.two_port_order:
        message = "The order of the two-port data is not given, so S12 and S21 cannot be told apart."
        faults.add(head.numbers[0], 1, "keyword", message, "Add [Two-Port Data Order] 12_21 or 21_12.")
    counts = [len(text.split()) for text in head.texts]
    if ports == 2 and not head.keyed:
        _drop_noise(head, counts, faults)
    starts = _records(head.numbers, counts, 1 + 2 * pairs, ports, faults)
    numbers = _numbers(head, faults)
    if numbers is None or len(faults):
        return None
    values = numbers.reshape(len(starts), 1 + 2 * pairs)
    with np.errstate(over="ignore"):
        values[:, 0] *= head.factor
    _check_frequencies(values[:, 0], starts, head, faults)
    return values


def _drop_noise(head: Head, counts: list[int], faults: Faults) -> None:
    """Leave out a 1.1 file's noise data, which begin where the frequency does not rise (1.1, noise data)."""
    above = 0
    for index, count in enumerate(counts):
        if index and count == _NOISE_NUMBERS and _frequency(head.texts[index]) <= _frequency(head.texts[above]):
            break
        if count % 2:
            above = index
    else:
        return
    for number, text, count in zip(head.numbers[index:], head.texts[index:], counts[index:], strict=True):
        if count != _NOISE_NUMBERS:
            message = f"This line has {count} numbers, and the frequency has fallen: noise data have 5."
            faults.add(number, word_column(text, 0), "order", message, "Frequencies must rise; noise data stand last.")
    del head.numbers[index:], head.texts[index:], counts[index:]


def _frequency(text: str) -> float:
    word = text.split(maxsplit=1)[0]
    return float(word) if is_number(word) else np.nan


def _records(numbers: list[int], counts: list[int], size: int, ports: int, faults: Faults) -> list[int]:
    """The lines on which the data of each frequency begin; faults where a frequency has too few numbers or too many.

    A frequency and its pairs are an odd number of words, pairs that go on are an even one.
    """
    if all(count == size for count in counts):
        return numbers
    starts: list[int] = []
    have = size
    lost = False
    for number, count in zip(numbers, counts, strict=True):
        if count % 2:
            if have < size and not lost:
                _miscounted(starts[-1], have, size, ports, faults)
            starts.append(number)
            have, lost = count, False
        else:
            have += count
        if not lost and (have > size or not starts):
            lost = True
            _miscounted(number, have if count % 2 else count, size, ports, faults)
    if have < size and not lost:
        _miscounted(starts[-1], have, size, ports, faults)
    return starts


def _miscounted(line: int, have: int, size: int, ports: int, faults: Faults) -> None:
    message = f"{have} number{'s' if have > 1 else ''} here; a frequency and its data are {size} for {ports} ports."
    hint = "A frequency begins a line; the data may go on over lines of whole pairs."
    faults.add(line, 1, "fields", message.replace("1 ports", "1 port"), hint)


def _numbers(head: Head, faults: Faults) -> Floats | None:
    """All numbers in a row; None with a fault for each word that is no finite number."""
    text = " ".join(head.texts)
    try:
        values = np.array(list(map(float, text.split())))
    except ValueError:
        values = np.array([np.nan])
    # What Python takes for a number and nobody else: 1_000, and digits of other scripts.
    if np.all(np.abs(values) < np.inf) and text.isascii() and "_" not in text:
        return values
    for number, line in zip(head.numbers, head.texts, strict=True):
        for index, word in enumerate(line.split()):
            if not is_number(word) or not np.isfinite(float(word)):
                hint = "Write the decimal point as a point." if "," in word else ""
                faults.add(number, word_column(line, index), "number", f"{quoted(word)} is not a finite number.", hint)
    return None


def _check_frequencies(frequency_hz: Floats, starts: list[int], head: Head, faults: Faults) -> None:
    for index in np.flatnonzero((frequency_hz < 0) | np.isinf(frequency_hz)):
        faults.add(
            starts[index], 1, "number", "This is no frequency: it is below zero, or beyond what can be computed."
        )
    for index in np.flatnonzero(np.diff(frequency_hz) <= 0):
        word = "is the same as" if frequency_hz[index + 1] == frequency_hz[index] else "is lower than"
        message = f"This frequency {word} the one before it, on line {starts[index]}."
        faults.add(starts[index + 1], 1, "order", message, "Frequencies must rise.")
    if head.frequencies and head.frequencies[0] != len(starts):
        said, line = head.frequencies
        message = f"{said} frequencies are announced here; the file holds {len(starts)}."
        faults.add(line, 1, "count", message, "Is the file cut short?")


def _assembled(file: str, head: Head, ports: int, reference: tuple[float, ...], values: Floats) -> Touchstone:
    first, second = values[:, 1::2], values[:, 2::2]
    if head.form == "ri":
        pairs = first + 1j * second
    else:
        magnitude = first if head.form == "ma" else np.power(10.0, np.clip(first, -6000.0, 6000.0) / 20.0)
        pairs = magnitude * np.exp(1j * np.radians(second))
    s = np.empty((len(values), ports, ports), dtype=np.complex128)
    to, of = _positions(head, ports)
    s[:, to, of] = pairs
    if head.matrix != "full":
        s[:, of, to] = pairs
    s.flags.writeable = False
    return Touchstone(file, frozen(values[:, 0]), s, reference)


def _positions(head: Head, ports: int) -> tuple[npt.NDArray[np.intp], npt.NDArray[np.intp]]:
    """Which parameter each pair of a record is, as two lists of ports from 0."""
    if head.matrix == "lower":
        return np.tril_indices(ports)
    if head.matrix == "upper":
        return np.triu_indices(ports)
    to, of = np.divmod(np.arange(ports * ports), ports)
    # 1.1 writes the parameters of two ports column by column, those of all others row by row.
    by_columns = ports == 2 and (head.two_port_order == "21_12" or not head.keyed)
    return (of, to) if by_columns else (to, of)
