"""Touchstone files: scikit-rf reads the same numbers from each; what is wrong is found with its line and column."""

from __future__ import annotations

import textwrap
from pathlib import Path

import numpy as np
import numpy.typing as npt
import pytest
import skrf
from hypothesis import given, settings
from hypothesis import strategies as st

from logbook.problems import Problems
from logbook.traces.touchstone import Touchstone, magnitude_db, magnitude_trace, read_touchstone

Complex = npt.NDArray[np.complex128]

UNITS = {"Hz": 1.0, "kHz": 1e3, "MHz": 1e6, "GHz": 1e9}
FORMS = ("RI", "MA", "DB")


def network(ports: int, points: int = 7) -> tuple[npt.NDArray[np.float64], Complex]:
    rng = np.random.default_rng(ports)
    s = rng.uniform(0.05, 1.0, (points, ports, ports)) * np.exp(1j * rng.uniform(-3, 3, (points, ports, ports)))
    return np.linspace(1e6, 500e6, points), s


def pair(value: complex, form: str) -> str:
    if form == "RI":
        return f"{value.real:.12g} {value.imag:.12g}"
    angle = np.degrees(np.angle(value))
    return f"{abs(value) if form == 'MA' else 20 * np.log10(abs(value)):.12g} {angle:.12g}"


def body(f: npt.NDArray[np.float64], s: Complex, unit: str, form: str, order: list[tuple[int, int]], each: int) -> str:
    """Numbers as the specification lays them out: `each` pairs on a line, a frequency ahead of the first."""
    lines = []
    for hz, matrix in zip(f, s, strict=True):
        pairs = [pair(matrix[to, of], form) for to, of in order]
        rows = [" ".join(pairs[k : k + each]) for k in range(0, len(pairs), each)]
        lines.append(f"{hz / UNITS[unit]:.12g} " + "\n".join(rows))
    return "\n".join(lines) + "\n"


def written_by_hand(ports: int, unit: str, form: str) -> tuple[str, npt.NDArray[np.float64], Complex]:
    f, s = network(ports)
    by_rows = [(to, of) for to in range(ports) for of in range(ports)]
    order = [(0, 0), (1, 0), (0, 1), (1, 1)] if ports == 2 else by_rows
    each = 4 if ports == 2 else min(ports, 4)
    return f"! by hand\n# {unit} S {form} R 50\n" + body(f, s, unit, form, order, each), f, s


def sound(text: str | bytes, name: str) -> Touchstone:
    problems = Problems()
    found = read_touchstone(text.encode() if isinstance(text, str) else text, name, problems)
    assert list(problems) == []
    assert found is not None
    return found


def faults(text: str | bytes, name: str) -> list[str]:
    problems = Problems()
    data = text if isinstance(text, bytes) else text.encode()
    assert read_touchstone(data, name, problems) is None
    return [f"{p.place.line}:{p.place.column} {p.code}" for p in problems]


@pytest.mark.parametrize("form", FORMS)
@pytest.mark.parametrize("unit", UNITS)
@pytest.mark.parametrize("ports", [1, 2, 3, 4, 5, 9])
def test_version_1_as_scikit_rf_reads_it(tmp_path: Path, ports: int, unit: str, form: str) -> None:
    text, f, s = written_by_hand(ports, unit, form)
    path = tmp_path / f"network.s{ports}p"
    path.write_text(text, encoding="ascii")
    found = sound(text, path.name)
    theirs = skrf.Network(str(path))
    np.testing.assert_allclose(found.frequency_hz, theirs.f, rtol=1e-12)
    np.testing.assert_allclose(found.s, theirs.s, rtol=0, atol=1e-12)
    # And the numbers that the file was made from: two readers could be wrong in the same way.
    np.testing.assert_allclose(found.frequency_hz, f, rtol=1e-11)
    np.testing.assert_allclose(found.s, s, rtol=0, atol=1e-10)
    assert found.reference_ohm == (50.0,) * ports


@pytest.mark.parametrize("form", ["ri", "ma", "db"])
@pytest.mark.parametrize("ports", [1, 2, 3, 4])
def test_files_written_by_scikit_rf(tmp_path: Path, ports: int, form: str) -> None:
    f, s = network(ports, 11)
    made = skrf.Network(frequency=skrf.Frequency.from_f(f, unit="hz"), s=s, z0=75)
    made.write_touchstone("made", dir=str(tmp_path), form=form)
    path = tmp_path / f"made.s{ports}p"
    found = sound(path.read_bytes(), path.name)
    np.testing.assert_allclose(found.frequency_hz, f, rtol=1e-12)
    np.testing.assert_allclose(found.s, s, rtol=0, atol=1e-9)
    assert found.reference_ohm == (75.0,) * ports


HEAD_2 = """\
! version 2
[Version] 2.0
# {unit} S {form} R 50
[Number of Ports] {ports}
{order}[Number of Frequencies] {points}
[Reference] {reference}
{matrix}[Network Data]
"""


def version_2(ports: int, form: str, two_port: str, matrix: str) -> tuple[str, Complex]:
    f, s = network(ports)
    if matrix != "Full":
        s = (s + s.transpose(0, 2, 1)) / 2
    order = [(to, of) for to in range(ports) for of in range(ports)]
    if two_port == "21_12":
        order = [(0, 0), (1, 0), (0, 1), (1, 1)]
    if matrix == "Lower":
        order = [(to, of) for to, of in order if to >= of]
    elif matrix == "Upper":
        order = [(to, of) for to, of in order if to <= of]
    head = HEAD_2.format(
        unit="MHz",
        form=form,
        ports=ports,
        points=len(f),
        order=f"[Two-Port Data Order] {two_port}\n" if two_port else "",
        reference=" ".join(["50"] * ports),
        matrix=f"[Matrix Format] {matrix}\n",
    )
    return head + body(f, s, "MHz", form, order, 4) + "[End]\n", s


@pytest.mark.parametrize("form", FORMS)
@pytest.mark.parametrize("matrix", ["Full", "Lower", "Upper"])
@pytest.mark.parametrize(("ports", "two_port"), [(1, ""), (2, "21_12"), (2, "12_21"), (3, ""), (4, "")])
def test_version_2(tmp_path: Path, ports: int, two_port: str, matrix: str, form: str) -> None:
    text, s = version_2(ports, form, two_port, matrix)
    path = tmp_path / "network.ts"
    path.write_text(text, encoding="ascii")
    found = sound(text, path.name)
    np.testing.assert_allclose(found.s, s, rtol=0, atol=1e-10)
    theirs = skrf.Network(str(path))
    np.testing.assert_allclose(found.frequency_hz, theirs.f, rtol=1e-12)
    if (two_port, matrix) in (("21_12", "Lower"), ("21_12", "Upper")):
        return  # scikit-rf 2.2 doubles S21 and S12 of these; what the file was made from has been compared above.
    np.testing.assert_allclose(found.s, theirs.s, rtol=0, atol=1e-12)


def test_what_scikit_rf_cannot_read() -> None:
    """An information section, a reference over two lines, and noise data behind the network data."""
    text = textwrap.dedent("""\
        [Version] 2.0
        # GHz S RI R 1
        [Number of Ports] 2
        [Two-Port Data Order] 21_12
        [Number of Frequencies] 1
        [Number of Noise Frequencies] 1
        [Reference]
        50
        75 ! output
        [Begin Information]
        [Anything] may stand here
        # Hz even this
        1 2 3
        [End Information]
        [Network Data]
        1 .1 0 .2 0 .3 0 .4 0
        [Noise Data]
        1 2.5 0.3 45 0.2
        [End]
        whatever
        """)
    found = sound(text, "amplifier.ts")
    np.testing.assert_allclose(found.s[0].real, [[0.1, 0.3], [0.2, 0.4]])
    assert found.reference_ohm == (50.0, 75.0)
    assert found.frequency_hz.tolist() == [1e9]


NOISY = """\
# GHz S MA R 50
2 .95 -26 3.57 157 .04 76 .66 -14
22 .60 -144 1.30 40 .14 40 .56 -85
! noise parameters
4 .7 .64 69 .38
18 2.7 .46 -33 .40
"""


def test_noise_data_of_version_1_are_passed_over(tmp_path: Path) -> None:
    path = tmp_path / "transistor.s2p"
    path.write_text(NOISY, encoding="ascii")
    found = sound(NOISY, path.name)
    theirs = skrf.Network(str(path))
    assert theirs.noisy
    np.testing.assert_allclose(found.frequency_hz, theirs.f)
    np.testing.assert_allclose(found.s, theirs.s, rtol=0, atol=1e-12)


@pytest.mark.parametrize("end", ["\n", "\r\n", "\r"])
@pytest.mark.parametrize("encoding", ["ascii", "utf-8-sig", "utf-16"])
def test_line_ends_and_byte_order_marks(end: str, encoding: str) -> None:
    assert sound(NOISY.replace("\n", end).encode(encoding), "a.s2p").frequency_hz.tolist() == [2e9, 22e9]


def test_defaults_of_the_option_line() -> None:
    """GHz, S, MA, 50 ohm (specification 1.1): without an option line, and with an empty one."""
    for head in ("", "#\n", "# R 50\n# MHz Z\n"):
        found = sound(f"! comment\n{head}\n1 0.5 90 ! more\n\n2 0.25 -90\n", "a.S1P")
        assert found.frequency_hz.tolist() == [1e9, 2e9]
        np.testing.assert_allclose(found.s[:, 0, 0], [0.5j, -0.25j], atol=1e-15)
        assert found.reference_ohm == (50.0,)


def test_magnitude() -> None:
    found = sound("# MHz S RI R 50\n1 0 0 0 0.1 2 0 0 0\n2 0 0 1 0 2 0 0 0\n", "a.s2p")
    np.testing.assert_allclose(magnitude_db(found, 2, 1), [-20.0, 0.0], atol=1e-12)
    assert np.isnan(magnitude_db(found, 1, 1)).all()
    trace = magnitude_trace(found, 1, 2)
    assert (trace.name, trace.file, trace.x_unit, trace.y_unit) == ("S12", "a.s2p", "Hz", "dB")
    np.testing.assert_allclose(trace.y, 20 * np.log10(2.0))
    for array in (found.s, found.frequency_hz, trace.y):
        assert not array.flags.writeable
    for ports in ((0, 1), (1, 3)):
        with pytest.raises(IndexError):
            magnitude_db(found, *ports)


@pytest.mark.parametrize(
    ("text", "name", "expected"),
    [
        ("", "a.s1p", ["1:1 empty"]),
        ("! nothing\n# Hz S RI R 50\n", "a.s1p", ["2:1 empty"]),
        (b"\x89PNG\r\n\x1a\n\x00\x00", "a.s1p", ["1:1 encoding"]),
        ("1 2 3\n", "a.dat", ["1:1 ports"]),
        ("1 2 3\n", "a.s0p", ["1:1 ports"]),
        ("# Hz Z RI R 50\n1 2 3\n", "a.s1p", ["1:6 parameter"]),
        ("# Hz S XY R 50\n1 2 3\n", "a.s1p", ["1:8 option"]),
        ("# Hz MHz S S RI R 50\n1 2 3\n", "a.s1p", ["1:6 option", "1:12 option"]),
        ("# Hz S RI R\n1 2 3\n", "a.s1p", ["1:12 option"]),
        ("# Hz S RI R -50\n1 2 3\n", "a.s1p", ["1:13 reference"]),
        ("# Hz S RI R 50 75 50\n1 2 3\n", "a.s1p", ["1:1 reference"]),
        ("1 2 3\n# Hz S RI R 50\n2 2 3\n", "a.s1p", ["2:1 option"]),
        ("1 2 x\n2 nan 3\n3 1e999 1_0\n", "a.s1p", ["1:5 number", "2:3 number", "3:3 number", "3:9 number"]),
        ("1 2,5 3\n", "a.s1p", ["1:3 number"]),
        ("1 \u0661 3\n", "a.s1p", ["1:3 number"]),
        ("-1 2 3\n", "a.s1p", ["1:1 number"]),
        ("1 2 3\n1e305 2 3\n", "a.s1p", ["2:1 number"]),
        ("2 2 3\n1 2 3\n1 2 3\n", "a.s1p", ["2:1 order", "3:1 order"]),
        ("1 2\n2 3 4\n", "a.s1p", ["1:1 fields"]),
        ("1 2 3 4 5\n2 3 4\n", "a.s1p", ["1:1 fields"]),
        ("1 1 2 3 4 5 6 7 8\n2 1 2 3 4 5 6 7\n3 1 2 3 4 5 6 7 8\n", "a.s2p", ["2:1 fields"]),
        ("1 1 2 3 4 5 6\n2 1 2 3 4 5 6 7 8\n", "a.s2p", ["1:1 fields"]),
        ("1 1 2 3 4 5 6 7 8\n2 1 2 3 4 5 6\n", "a.s2p", ["2:1 fields"]),
        (NOISY + "3 1 2\n", "a.s2p", ["7:1 order"]),
        ("[Version] 3.0\n[Number of Ports] 1\n[Network Data]\n1 2 3\n", "a", ["1:11 version"]),
        ("[Version] 2.0\n[Number of Ports] none\n[Network Data]\n1 2 3\n", "a.s1p", ["2:19 ports"]),
        (
            "[Version] 2.0\n[Number of Ports] 1\n[Network Dat]\n1 2 3\n",
            "a",
            ["3:1 keyword", "4:1 empty", "4:1 keyword"],
        ),
        ("[Version] 2.0\n[Number of Ports] 1\n[Number of Ports] 1\n[Network Data]\n1 2 3\n", "a", ["3:1 keyword"]),
        ("[Version] 2.0\n[Number of Ports] 2\n[Network Data]\n1 1 2 3 4 5 6 7 8\n", "a", ["4:1 keyword"]),
        (
            "[Version] 2.0\n[Number of Ports] 1\n[Number of Frequencies] 3\n[Network Data]\n1 2 3\n[End]\n",
            "a",
            ["3:1 count"],
        ),
        (
            "[Version] 2.0\n[Number of Ports] 1\n[Number of Frequencies] 0\n[Matrix Format] Round\n"
            "[Two-Port Data Order] 11_22\n[Mixed-Mode Order] D1,2\n[Reference] x\n[Network Data]\n1 2 3\n",
            "a",
            ["3:25 count", "4:17 keyword", "5:23 keyword", "6:1 parameter", "7:13 reference"],
        ),
    ],
)
def test_faults(text: str | bytes, name: str, expected: list[str]) -> None:
    assert faults(text, name) == expected


def test_a_file_that_is_wrong_throughout_is_not_listed_line_by_line() -> None:
    found = faults("1 2 x\n" * 5000, "a.s1p")
    assert len(found) == 21
    assert found[-1] == "21:5 more"


WORDS = [
    "[Version] 2.0",
    "[Network Data]",
    "[Number of Ports] 2",
    "[Reference]",
    "[End]",
    "# MHz S DB R 50",
    "[",
    "#",
    "!",
]
WORDS += [
    "[Noise Data]",
    "[Begin Information]",
    "[Matrix Format] Lower",
    "1 2 3",
    "1 2 3 4 5",
    "0 1e308 9e9",
    "-1e400 nan",
]


@settings(deadline=None, max_examples=300)
@given(
    st.one_of(
        st.binary(max_size=300),
        st.text(max_size=200).map(lambda text: text.encode("utf-8", "replace")),
        st.lists(st.sampled_from(WORDS), max_size=12).map(lambda lines: "\n".join(lines).encode()),
    ),
    st.sampled_from(["a.s1p", "a.s2p", "a.s3p", "a.ts"]),
)
def test_nothing_is_raised_and_every_fault_has_a_place(data: bytes, name: str) -> None:
    problems = Problems()
    found = read_touchstone(data, name, problems)
    assert (found is None) == (len(problems) > 0)
    lines = data.replace(b"\r\n", b"\n").replace(b"\r", b"\n").count(b"\n") + 1
    for problem in problems:
        assert problem.place.file == name
        assert problem.place.column >= 1
        assert problem.code
        assert 1 <= problem.place.line <= max(lines, len(data))
    if found is not None:
        assert np.isfinite(found.s).all()
        assert (np.diff(found.frequency_hz) > 0).all()
