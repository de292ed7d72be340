"""CSV of many instruments: layouts that were seen on benches, written out here, and the faults of bad ones."""

from __future__ import annotations

import csv
import io
import time
from collections.abc import Callable

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from logbook.problems import CAUTION, Place, Problems
from logbook.traces.csv_trace import read_table
from logbook.traces.headers import split_head
from logbook.traces.picking import Wanted, pick
from logbook.traces.trace import Trace

ENTRY = Place("entry.md", 7, 4)
FREQUENCY = Wanted(("frequency",), ENTRY)
LEVEL = Wanted(("ratio", "level", "density"), ENTRY)
LAYOUT_X = [50.0e6, 50.1e6, 50.2e6]
LAYOUT_Y = [-30.5, -28.25, -31.0]


def read(data: str | bytes, x: Wanted = FREQUENCY, y: Wanted = LEVEL) -> tuple[Trace | None, list[str]]:
    problems = Problems()
    table = read_table(data.encode() if isinstance(data, str) else data, "sweep.csv", problems)
    found = None if table is None else pick(table, x, y, problems)
    assert (found is None) == any(problem.severity != CAUTION for problem in problems)
    return found, [f"{p.place.line}:{p.place.column} {p.code}" for p in problems]


LAYOUTS = {
    "comma": "Frequency (MHz),Level (dBm)\n50.0,-30.5\n50.1,-28.25\n50.2,-31\n",
    "semicolon, decimal comma": "Frequenz [MHz];Pegel [dBm]\n50,0;-30,5\n50,1;-28,25\n50,2;-31,0\n",
    "semicolon, decimal point": "freq_MHz;level_dBm\n50.0;-30.5\n50.1;-28.25\n50.2;-31.0\n",
    "tab, decimal comma": "Freq/MHz\tS21/dB\n50,0\t-30,5\n50,1\t-28,25\n50,2\t-31,0\n",
    "tab and spaces": "Freq MHz \t Level dBm\n 50.0 \t -30.5\n 50.1 \t-28.25 \n50.2\t-31\n",
    "spaces": "# freq_MHz level_dBm\n50.0  -30.5\n50.1   -28.25\n50.2 -31\n",
    "spaces, decimal comma": "Freq (MHz)   Level (dBm)\n50,0  -30,5\n50,1   -28,25\n50,2 -31,0\n",
    "comma and spaces": "Frequency (MHz) , Level (dBm)\n50.0 , -30.5\n50.1 , -28.25\n50.2 , -31\n",
    "quoted": '"Frequency, MHz","Level, dBm"\n"50.0","-30.5"\n"50.1","-28.25"\n"50.2","-31"\n',
    "quoted, decimal comma": '"Frequency (MHz)","Level (dBm)"\n"50,0","-30,5"\n"50,1","-28,25"\n"50,2","-31"\n',
    "exponents": "Frequency (Hz),Level (dBm)\n+5.0000E+07,-3.05E+01\n5.01e7,-2.825E+01\n5.02E7,-31.\n",
    "trailing separators": "Frequency (MHz),Level (dBm),\n50.0,-30.5,\n50.1,-28.25,\n50.2,-31,\n",
    "trailing separators in the rows alone": "Frequency (MHz);Level (dBm)\n50.0;-30.5;;\n50.1;-28.25;;\n50.2;-31;;\n",
    "preamble": "Type,SA-1\nDate,2026-05-09\nRBW,10000,Hz\nPoints,3\n\nFreq (MHz),Level (dBm)\n"
    "50.0,-30.5\n50.1,-28.25\n50.2,-31\n",
    "preamble, no head": "Type;SA;\nx-Unit;MHz;\ny-Unit;dBm;\nDetector;RMS;\nValues;3;\n"
    "50,0;-30,5;\n50,1;-28,25;\n50,2;-31;\n",
    "head in a comment": "! made by hand\n! Freq (MHz), Level (dBm)\n50.0,-30.5\n50.1,-28.25\n50.2,-31\n",
    "comments everywhere": "% a, b\n; a\n' a\n// a\nf (MHz),p (dBm)\n# x, y\n"
    "50.0,-30.5\n# in the midst\n50.1,-28.25\n\n50.2,-31\n# end",
    "units on a line": "Frequency,Level\nMHz,dBm\n50.0,-30.5\n50.1,-28.25\n50.2,-31\n",
    "units on a line in brackets": "Frequency,Level\n(MHz),(dBm)\n50.0,-30.5\n50.1,-28.25\n50.2,-31\n",
    "begin and end": "!CSV A.01\nBEGIN CH1_DATA\nFreq(MHz),S21(DB)\n50.0,-30.5\n50.1,-28.25\n50.2,-31\nEND\n",
    "columns of other things": "No,Pass,Freq (MHz),Level (dBm)\n1,yes,50.0,-30.5\n2,yes,50.1,-28.25\n3,no,50.2,-31\n",
    "level first": "Level (dBm),Freq (MHz)\n-30.5,50.0\n-28.25,50.1\n-31,50.2\n",
    "falling sweep": "Freq (MHz),Level (dBm)\n50.2,-31\n50.1,-28.25\n50.0,-30.5\n",
}


@pytest.mark.parametrize("text", LAYOUTS.values(), ids=LAYOUTS.keys())
def test_layouts(text: str) -> None:
    found, faults = read(text)
    assert faults == []
    assert found is not None
    assert found.x.tolist() == LAYOUT_X
    assert found.y.tolist() == LAYOUT_Y
    assert (found.x_unit, found.y_unit) == ("Hz", "dB" if "S21" in text else "dBm")
    assert found.file == "sweep.csv"
    assert not found.x.flags.writeable
    assert not found.y.flags.writeable


@pytest.mark.parametrize("end", ["\n", "\r\n", "\r"])
@pytest.mark.parametrize("encoding", ["utf-8", "utf-8-sig", "utf-16", "cp1252"])
def test_line_ends_and_encodings(end: str, encoding: str) -> None:
    text = "Frequenz (MHz);Stärke (dBµV)\n50,0;-30,5\n50,1;-28,25\n50,2;-31\n"
    found, faults = read(text.replace("\n", end).encode(encoding), y=Wanted(("voltage_level",), ENTRY))
    assert faults == []
    assert found is not None
    assert found.y.tolist() == LAYOUT_Y
    assert (found.name, found.y_unit) == ("Stärke", "dBuV")


# The name and the unit that a person would read in it.
HEADS = {
    "Frequency (MHz)": ("Frequency", "MHz"),
    "Level [dBm]": ("Level", "dBm"),
    "freq_Hz": ("freq", "Hz"),
    "freq_mhz": ("freq", "MHz"),
    "Freq/MHz": ("Freq", "MHz"),
    "FREQ(HZ)": ("FREQ", "Hz"),
    "S21(DB)": ("S21", "dB"),
    "Frequency, MHz": ("Frequency", "MHz"),
    "Frequency in kHz": ("Frequency", "kHz"),
    "Frequency - GHz": ("Frequency", "GHz"),
    "Freq (MHz) CH1": ("Freq", "MHz"),
    "Noise (V/sqrt(Hz))": ("Noise", "V/sqrt(Hz)"),
    "Noise/nV/rtHz": ("Noise", "nV/rtHz"),
    "noise_dBm_per_Hz": ("noise", "dBm/Hz"),
    "Density {dBm/Hz}": ("Density", "dBm/Hz"),
    "time_s": ("time", "s"),
    "Detector (V)": ("Detector", "V"),
    "Detector/V": ("Detector", "V"),
    "Hz": ("Hz", "Hz"),
    "Frequency": ("Frequency", ""),
    "Trace A": ("Trace A", ""),
    "Trace_A": ("Trace_A", ""),
    "Level min": ("Level min", ""),
    "Phase (deg)": ("Phase (deg)", ""),
    "S21/S11": ("S21/S11", ""),
    "All": ("All", ""),
    "": ("", ""),
}


@pytest.mark.parametrize("head", HEADS)
def test_heads(head: str) -> None:
    assert split_head(head) == HEADS[head]


S_PARAMETERS = "Frequency (MHz),S11 (dB),S21 (dB),S21 (deg)\n1,-20,-1,10\n2,-21,-2,20\n3,-22,-3,30\n"


@pytest.mark.parametrize("column", ["S21 (dB)", "s21 (DB)", "3", 3, " S21 (dB) "])
def test_a_column_by_its_head_or_number(column: str | int) -> None:
    found, faults = read(S_PARAMETERS, y=Wanted(("ratio",), ENTRY, column))
    assert faults == []
    assert found is not None
    assert found.y.tolist() == [-1.0, -2.0, -3.0]
    assert found.name == "S21"


def test_a_column_by_its_head_without_unit() -> None:
    found, _ = read(S_PARAMETERS, y=Wanted(("ratio",), ENTRY, "s11"))
    assert found is not None
    assert found.y.tolist() == [-20.0, -21.0, -22.0]


def test_units_are_given_where_the_file_has_none() -> None:
    text = "1,2\n2,3\n3,4\n"
    found, faults = read(text, Wanted(("frequency",), ENTRY, None, "kHz"), Wanted(("level",), ENTRY, None, "dBW"))
    assert faults == []
    assert found is not None
    assert found.x.tolist() == [1e3, 2e3, 3e3]
    assert found.y.tolist() == [32.0, 33.0, 34.0]
    assert (found.x_unit, found.y_unit, found.name) == ("Hz", "dBm", "")


def test_small_units_round_once() -> None:
    # The double nearest to 0.0503 is what reading "50.3e-3" gives.
    text = "t (ms),Detector (mV)\n1,50.3\n2,50.7\n3,0.1\n"
    found, _ = read(text, Wanted(("time",), ENTRY), Wanted(("voltage",), ENTRY))
    assert found is not None
    assert found.y.tolist() == [50.3e-3, 50.7e-3, 0.1e-3]


@pytest.mark.parametrize(("separator", "decimal"), [(",", "."), (";", ","), ("\t", ","), (" ", ".")])
def test_a_long_file_behind_a_long_preamble(separator: str, decimal: str) -> None:
    preamble = "".join(f"Setting {k}{separator}{k}\n" for k in range(700))
    x = np.linspace(1e6, 2e6, 3000)
    y = np.sin(x) - 50.0
    rows = [f"{a!r}{separator}{b!r}".replace(".", decimal) for a, b in zip(x.tolist(), y.tolist(), strict=True)]
    heads = separator.join(["freq_Hz", "level_dBm"])
    found, faults = read(preamble + heads + "\n" + "\n".join(rows))
    assert faults == []
    assert found is not None
    assert found.x.tolist() == x.tolist()
    assert found.y.tolist() == y.tolist()


@pytest.mark.benchmark
def test_a_hundred_thousand_points_are_read_in_three_times_what_plain_python_takes() -> None:
    x = np.linspace(1e6, 1e9, 100_000)
    text = "Frequency (Hz),Level (dBm)\n" + "\n".join(f"{a:.2f},{-a / 1e8:.3f}" for a in x)
    data = text.encode()

    def plain() -> None:
        [tuple(map(float, line.split(","))) for line in data.decode().split("\n")[1:]]

    def seconds(work: Callable[[], object]) -> float:
        took = []
        for _ in range(5):
            start = time.perf_counter()
            work()
            took.append(time.perf_counter() - start)
        return min(took)

    ours, floor = seconds(lambda: read(data)), seconds(plain)
    print(f"100,000 points: {ours:.3f} s, plain {floor:.3f} s")
    assert ours <= 3.0 * floor


def test_a_second_table_is_said_to_be_left_out() -> None:
    found, faults = read("f (MHz),L (dBm)\n1,2\n2,3\n3,4\nEND\nBEGIN CH2\n1,2\n")
    assert faults == ["6:1 second_table"]
    assert found is not None
    assert len(found.x) == 3


TABLE = "f (MHz),L (dBm)\n1,2\n2,3\n3,4\n"


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("", ["1:1 empty"]),
        ("\n\n  \n", ["1:1 empty"]),
        ("hello\nworld, again\n", ["1:1 empty"]),
        (b"PK\x03\x04\x00\x00", ["1:1 encoding"]),
        ("f (MHz),L (dBm)\n1,2\n2,x\n3,4\n", ["3:3 number"]),
        ("f (MHz),L (dBm)\n1,x\n2,3\n3,4\n", ["2:3 number"]),
        ("f (MHz);L (dBm)\n1;  x1\n2;3\n3;4\n", ["2:5 number"]),
        ('f (MHz),L (dBm)\n1,2\n2,"3,4,5"\n3,4\n', ["3:3 number"]),
        ('f (MHz),L (dBm)\n"1,0", 2\n"2,0", x\n3,4\n', ["3:8 number"]),
        ("f (MHz),L (dBm)\n1,\n2,3\n3,4\n", ["2:3 number"]),
        ("f (MHz),L (dBm)\n1,nan\n2,-inf\n3,---\n4,9.91E37\n5,1\n6,1", [f"{n}:3 number" for n in (2, 3, 4, 5)]),
        ("f (MHz),L (dBm)\n1,1_0\n2,\u0663\n3,4\n4,5\n5,6\n", ["2:3 number", "3:3 number"]),
        ("f (MHz),L (dBm)\n1,2\n2\n3,4,5\n4,5\n", ["3:2 fields", "4:5 fields"]),
        ("f (MHz),L (dBm)\n1,2\n2\n3,x\n4,5\n5,6\n", ["3:2 fields", "4:3 number"]),
        ("f (MHz),L (dBm)\n1,2\n2,3\n2,4\n3,5\n", ["4:1 order"]),
        ("f (MHz),L (dBm)\n1,2\n3,3\n2,4\n4,5\n", ["4:1 order"]),
        ("f (MHz),L (dBm)\n4,2\n3,3\n3,4\n1,5\n", ["4:1 order"]),
        ("f (MHz),L (dBm)\n1,2\n2,3\n", ["3:1 points"]),
        ("f (MHz);L (dBm)\n1,5;-1.5\n2,5;-2.5\n3,5;3\n", ["2:1 number"]),
        ("f (MHz)\tL (dBm)\n1\t1,234.5\n2\t2\n3\t3\n", ["2:3 number"]),
        ("f (MHz);L (dBm)\n1;1,5\n2;2.5\n3;3\n", ["2:3 number"]),
        ("Frequency (MHz),Level (dBm)\n50,1,-30,5\n50,2,-30,4\n50,3,-30,3\n", ["2:1 fields"]),
        ("f,L (dBm)\n1,2\n2,3\n3,4\n", ["7:4 unit"]),
        ("f (MHz),L\n1,2\n2,3\n3,4\n", ["7:4 unit"]),
        ("f (MHz),L (V)\n1,2\n2,3\n3,4\n", ["1:1 dimension"]),
        (S_PARAMETERS, ["7:4 column"]),
    ],
)
def test_faults(text: str | bytes, expected: list[str]) -> None:
    assert read(text)[1] == expected


@pytest.mark.parametrize(
    ("y", "expected", "said"),
    [
        (Wanted(("level",), ENTRY, "M"), "column", "no column 'M'"),
        (Wanted(("level",), ENTRY, "3"), "column", "no column '3'"),
        (Wanted(("level",), ENTRY, "0"), "column", "no column '0'"),
        (Wanted(("level",), ENTRY, "f"), "column", "is x already"),
        (Wanted(("level",), ENTRY, None, "dbm"), "unit", "Did you mean 'dBm'?"),
        (Wanted(("level",), ENTRY, None, "parsec"), "unit", "Give one of dBm, dBW."),
        (Wanted(("level",), ENTRY, None, "MHz"), "dimension", "the unit of a frequency"),
        (Wanted(("level",), ENTRY, None, "dBW"), "unit", "Leave the unit out"),
    ],
)
def test_faults_of_the_choice_stand_in_the_entry(y: Wanted, expected: str, said: str) -> None:
    problems = Problems()
    table = read_table(TABLE.encode(), "sweep.csv", problems)
    assert table is not None
    assert pick(table, FREQUENCY, y, problems) is None
    (problem,) = problems
    assert (problem.place, problem.code) == (ENTRY, expected)
    assert said in str(problem)


def test_a_name_nearly_right_and_one_that_two_columns_have() -> None:
    _, faults = read(S_PARAMETERS, y=Wanted(("ratio",), ENTRY, "S22"))
    assert faults == ["7:4 column"]
    problems = Problems()
    table = read_table(b"f (MHz),Level (dB),Level (dB)\n1,2,3\n2,3,4\n3,4,5\n", "sweep.csv", problems)
    assert table is not None
    assert pick(table, FREQUENCY, Wanted(("ratio",), ENTRY, "Levle"), problems) is None
    assert pick(table, FREQUENCY, Wanted(("ratio",), ENTRY, "Level"), problems) is None
    said = [str(problem) for problem in problems]
    assert any("Did you mean 'Level'?" in text for text in said)
    assert any("by its number: 2 and 3." in text for text in said)


def test_a_file_that_is_wrong_throughout_is_not_listed_line_by_line() -> None:
    text = "f (MHz),L (dBm)\n1,2\n2,3\n" + "".join(f"{k},x\n" for k in range(3, 5000))
    _, faults = read(text)
    assert len(faults) == 21
    assert faults[-1] == "24:4 more"


FLOATS = st.floats(-1e9, 1e9, allow_nan=False)


@settings(deadline=None, max_examples=100)
@given(
    st.lists(st.tuples(st.integers(0, 10**9), FLOATS), min_size=3, max_size=30, unique_by=lambda row: row[0]),
    st.sampled_from([",", ";", "\t"]),
    st.sampled_from([csv.QUOTE_MINIMAL, csv.QUOTE_ALL]),
)
def test_what_the_csv_module_writes_is_read_back(rows: list[tuple[int, float]], separator: str, quoting: int) -> None:
    rows.sort()
    sheet = io.StringIO()
    writer = csv.writer(sheet, delimiter=separator, quoting=quoting)  # type: ignore[arg-type]
    writer.writerow(["Frequency (Hz)", "Level (dBm)"])
    writer.writerows(rows)
    found, faults = read(sheet.getvalue())
    assert faults == []
    assert found is not None
    assert found.x.tolist() == [float(x) for x, _ in rows]
    assert found.y.tolist() == [y for _, y in rows]


PARTS = [
    "1",
    "2.5",
    "-3",
    "1,5",
    "x",
    '"',
    "",
    " ",
    "nan",
    "\n",
    "\n",
    "\r",
    ",",
    ",",
    ";",
    "\t",
    "#",
    "f (MHz)",
    "END",
    "dBm",
]


@settings(deadline=None, max_examples=400)
@given(
    st.one_of(
        st.binary(max_size=300),
        st.text(max_size=200).map(lambda text: text.encode("utf-8", "replace")),
        st.lists(st.sampled_from(PARTS), max_size=40).map(lambda parts: "".join(parts).encode()),
    ),
    st.sampled_from([None, "1", "2", "f"]),
    st.sampled_from([None, "MHz", "?"]),
)
def test_nothing_is_raised_and_every_fault_has_a_place(data: bytes, column: str | None, unit: str | None) -> None:
    problems = Problems()
    table = read_table(data, "sweep.csv", problems)
    found = None
    if table is not None:
        x = Wanted(("frequency",), ENTRY, column, unit)
        found = pick(table, x, Wanted(("level", "number"), ENTRY, None, unit), problems)
    assert (found is None) == any(problem.severity != CAUTION for problem in problems)
    for problem in problems:
        assert problem.place == ENTRY or (problem.place.file == "sweep.csv" and problem.place.column >= 1)
        assert problem.place == ENTRY or 1 <= problem.place.line <= len(data) + 1
        assert problem.code
    if found is not None:
        assert len(found.x) == len(found.y) >= 3
        assert np.isfinite(found.x).all()
        assert np.isfinite(found.y).all()
        assert (np.diff(found.x) > 0).all()
