"""Changing nothing but the conditions of a reading never makes a change beyond doubt."""

from __future__ import annotations

import math

from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from scipy.special import exp1
from workshop import block, book_of, chain, change, delta, entry, reading

GAUSSIAN = 0.5 * math.sqrt(math.pi / math.log(2))
FLOOR_DBM_HZ = -155.0
LOSS = {"tap": 20.0, "pad": 10.3}
AVERAGE_DB = {"power": 0.0, "log": -2.50682, "voltage": -1.04909}
LG = 10 / math.log(10)

BENCH = block(
    "bench",
    f"""bench: shack
reads: {{accuracy: ± 1 dB, linearity: ± 0.05 dB, floor: {FLOOR_DBM_HZ} dBm/Hz, rbw_filter: gaussian}}
path:
  - {{name: tap, loss: {LOSS["tap"]} dB}}
  - {{name: pad, loss: {LOSS["pad"]} dB}}""",
)
CHAIN = chain("name: amp, gain: 20 dB, nf: 3 dB")
NOTHING = change("  - {set: amp, to: {note: a new screw}}")


def power(dbm: float) -> float:
    return 10 ** (dbm / 10)


@st.composite
def conditions(draw: st.DrawFn) -> tuple[float, str, tuple[str, ...]]:
    """RBW in Hz, averaging, and the parts that stand between."""
    rbw = draw(st.sampled_from((300.0, 1e3, 3e3, 10e3, 30e3)))
    return rbw, draw(st.sampled_from(tuple(AVERAGE_DB))), tuple(draw(st.sets(st.sampled_from(tuple(LOSS)))))


def text(rbw: float, averaging: str, through: tuple[str, ...], shown: str) -> str:
    names = f"[{', '.join(sorted(through))}]"
    return f"bench: shack\nrbw: {rbw} Hz\naveraging: {averaging}\nthrough: {names}\n{shown}"


def noise_shown(density: float, rbw: float, averaging: str, through: tuple[str, ...]) -> float:
    """What the instrument shows of a noise density at the unit (dBm/Hz), its own noise with it."""
    width = 10 * math.log10(rbw * GAUSSIAN)
    behind = density - sum(LOSS[name] for name in through)
    return 10 * math.log10(power(behind) + power(FLOOR_DBM_HZ)) + width + AVERAGE_DB[averaging]


def carrier_shown(level: float, rbw: float, averaging: str, through: tuple[str, ...]) -> float:
    """What it shows of a carrier: the power average, or Moulthrop and Muha's law for a log average."""
    noise = FLOOR_DBM_HZ + 10 * math.log10(rbw * GAUSSIAN)
    behind = level - sum(LOSS[name] for name in through)
    if averaging == "power":
        return 10 * math.log10(power(behind) + power(noise))
    x = power(behind - noise)
    # Far above the noise E1 has vanished and the power of the noise is all that differs, by less than 1e-8 dB.
    return noise + LG * (math.log(x) + float(exp1(x)))


FEW = settings(max_examples=60, derandomize=True, deadline=None, database=None, suppress_health_check=list(HealthCheck))


@FEW
@given(st.floats(-128, -90), conditions(), conditions(), st.booleans())
def test_noise(density: float, one: tuple, other: tuple, at_unit: bool) -> None:  # type: ignore[type-arg]
    blocks = []
    for rbw, averaging, through in (one, other):
        shown = noise_shown(density, rbw, averaging, through)
        corrected = at_unit and (rbw, averaging, through) == other
        shown += sum(LOSS[name] for name in through) if corrected else 0.0
        conditions = text(rbw, averaging, through, "shown_at: unit" if corrected else "")
        blocks.append(reading(f"output_noise: {shown!r} dBm", conditions))
    book = book_of(
        entry("01-01", CHAIN, BENCH, blocks[0], revision="A"), entry("02-01", NOTHING, blocks[1], revision="B")
    )
    found = delta(book, "rx/output_noise", "B")
    assert found.verdict == "same", found.why
    assert abs(found.delta) < 0.001


@FEW
@given(st.floats(-95, -10), conditions(), conditions())
def test_carriers(level: float, one: tuple, other: tuple) -> None:  # type: ignore[type-arg]
    blocks = []
    for rbw, averaging, through in (one, other):
        averaging = "log" if averaging == "voltage" else averaging
        shown = carrier_shown(level, rbw, averaging, through)
        blocks.append(reading(f"output_level: {shown!r} dBm", text(rbw, averaging, through, "")))
    book = book_of(
        entry("01-01", CHAIN, BENCH, blocks[0], revision="A"), entry("02-01", NOTHING, blocks[1], revision="B")
    )
    found = delta(book, "rx/output_level", "B")
    assert found.verdict == "same", found.why
    assert abs(found.delta) < 0.001
