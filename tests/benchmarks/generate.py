"""A logbook of any size, made by chance that is always the same: `python generate.py FOLDER [ENTRIES] [REVISIONS]`."""

from __future__ import annotations

import sys
from collections.abc import Iterator
from datetime import date, timedelta
from pathlib import Path
from random import Random

FIRST_DAY = date(2021, 1, 2)
BLOCKS_PER_ENTRY = 3

BENCH = """bench: shack
reads: {accuracy: ± 1.5 dB, linearity: ± 0.3 dB, floor: -165 dBm/Hz, max_input: 20 dBm, rbw_filter: gaussian}
drives: {accuracy: ± 0.8 dB}
path:
  - {name: tap, loss: 30 ± 0.4 dB, max_input: 25 W}
  - {name: pad, loss: 10 ± 0.2 dB, max_input: 2 W}
calibrated: 2020-06-01
due: 2040-06-01
"""

TARGET = """quantity: noise_floor
at: 50.1 MHz
rbw: 10 kHz
limit: <= -128 dBm
why: weak stations stand a few dB above the sky
"""

PROSE = (
    "The afternoon went into the box on the left of the bench. The screws of the lid had seized, the braid of the\n"
    "input lead was down to a few strands, and the old solder took two passes of wick. After an hour warm the\n"
    "readings held still.\n",
    "A wire had come loose at the test point, so the first set of numbers went into the bin. The second set was\n"
    "taken twice, an hour apart, with the lid on and the *same* lead.\n",
    "What is left: the shield between the mixer and the filter, and a proper bracket instead of tape.\n",
)


def write_logbook(folder: Path, entries: int = 300, revisions: int = 60, stages: int = 10) -> None:
    """Entries of three blocks each: revisions at even distances, readings, items opened and closed, one target."""
    folder.mkdir(parents=True, exist_ok=True)
    chance = Random(50)
    every = max(1, entries // max(1, revisions))
    made = 0
    for number in range(entries):
        makes = number % every == 0 and made < revisions
        blocks = list(_blocks(number, made if makes else None, stages, chance))
        made += makes
        day = FIRST_DAY + timedelta(days=number)
        name = f"{day}-session-{number}.md"
        label = f"R{made}" if makes else None
        (folder / name).write_text(_entry(number, day, label, blocks), encoding="utf-8", newline="\n")


def _entry(number: int, day: date, label: str | None, blocks: list[tuple[str, str]]) -> str:
    front = f"---\ntitle: Session {number}\ndate: {day}\n" + (f"revision: {label}\n" if label else "") + "---\n"
    parts = [f"{front}\n# Session {number}\n"]
    for index, (kind, text) in enumerate(blocks):
        parts += [PROSE[index % len(PROSE)], f"```yaml {kind}\n{text}```\n"]
    return "\n".join(parts)


def _blocks(number: int, makes: int | None, stages: int, chance: Random) -> Iterator[tuple[str, str]]:
    if makes == 0:
        yield "bench", BENCH
        yield "chain", _chain(stages, chance)
        yield "target", TARGET
        return
    if makes is not None:
        yield "change", _change(makes, stages, chance)
    yield "reading", _reading(chance)
    if makes is None:
        yield "reading", _reading(chance, at="50.3 MHz")
    done = f"- {{done: item-{number - 6}}}\n" if number % 3 == 0 and number > 12 else ""
    yield "todo", f"- {{id: item-{number}, what: look at the joint of stage {number % stages}}}\n" + done


def _chain(stages: int, chance: Random) -> str:
    rows = [f"  - {_stage(number, chance)}" for number in range(stages)]
    head = "chain: rx\nsignal: 50.1 MHz\nlevel: -60 dBm\nbandwidth: 10 kHz\nsnr: 10 dB\nstages:\n"
    return head + "\n".join(rows) + "\n"


def _stage(number: int, chance: Random) -> str:
    name = f"stage-{number}"
    if number == 3:
        return f"{{name: {name}, gain: -6.5 ± 0.4 dB, nf: 7 dB, iip3: 13 dBm, lo: 71.5 MHz, output: difference}}"
    if number % 3 == 0:
        return f"{{name: {name}, loss: {1 + 2 * chance.random():.1f} ± 0.2 dB, bandwidth: 15 kHz}}"
    gain, nf = 8 + 4 * chance.random(), 1 + 3 * chance.random()
    return (
        f"{{name: {name}, gain: {gain:.1f} ± 0.5 dB, nf: {nf:.1f} ± 0.2 dB, "
        f"oip3: {chance.randint(20, 32)} ± 1 dBm, op1db: {chance.randint(8, 16)} dBm}}"
    )


def _change(number: int, stages: int, chance: Random) -> str:
    amplifiers = [each for each in range(stages) if each % 3]
    stage = amplifiers[number % len(amplifiers)]
    return (
        f"chain: rx\nwhy: stage {stage} was the weakest of all\nsteps:\n  - set: stage-{stage}\n"
        f"    to: {{gain: {8 + 4 * chance.random():.1f} ± 0.4 dB, nf: {1 + 3 * chance.random():.1f} ± 0.2 dB}}\n"
    )


def _reading(chance: Random, at: str = "50.1 MHz") -> str:
    rbw, averaging = chance.choice(("1 kHz", "3 kHz", "10 kHz")), chance.choice(("power", "log", "voltage"))
    gains = ", ".join(f"{36 + chance.random():.1f} dB" for _ in range(3))
    return (
        f"at: {at}\nrbw: {rbw}\naveraging: {averaging}\nbench: shack\nresults:\n"
        f"  noise_floor: {-126 - 2 * chance.random():.1f}(3) dBm\n  gain: [{gains}]\n"
        f"  iip3: {-22 + 2 * chance.random():.1f} ± 0.5 dBm\n  supply_current: {100 + chance.randint(0, 9)}(1) mA\n"
    )


if __name__ == "__main__":
    write_logbook(Path(sys.argv[1]), *(int(each) for each in sys.argv[2:]))
