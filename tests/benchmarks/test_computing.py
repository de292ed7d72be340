"""Reading and computing, against what loading the same YAML costs in any case."""

from __future__ import annotations

from pathlib import Path

import pytest
from generate import write_logbook
from timed import tell, timed

pytestmark = pytest.mark.benchmark

LOAD = """
import re, sys
from pathlib import Path
import numpy, yaml
for path in sorted(Path(sys.argv[1]).glob("*.md")):
    for block in re.findall(r"^```yaml [a-z]+$\\n(.*?)^```$", path.read_text(encoding="utf-8"), re.S | re.M):
        # A limit such as '<= -128 dBm' is a folded text to this loader, and a fault; ours reads it as written.
        yaml.load(block.replace("limit: <=", "limit: at most"), Loader=yaml.CSafeLoader)
"""


def test_computing_takes_three_times_what_loading_the_yaml_takes(tmp_path: Path) -> None:
    write_logbook(tmp_path / "entries", entries=300, revisions=60, stages=10)
    # One after the other in turn, so that a machine that is slow for a while is so for both.
    runs = [
        (timed(["-m", "logbook", "check", "entries"], tmp_path), timed(["-c", LOAD, "entries"], tmp_path))
        for _ in range(8)
    ]
    check, floor = (min(each, key=lambda run: run.seconds) for each in zip(*runs, strict=True))
    tell(f"check {check.seconds:.2f} s, loading alone {floor.seconds:.2f} s: {check.seconds / floor.seconds:.2f} times")
    assert check.seconds <= 3 * floor.seconds


COMPARED = """
import gc, sys, time
from pathlib import Path
import logbook.book.book as room
from logbook.book import make_book
from logbook.book.sources import find_sources
from logbook.findings import Findings
folder = Path(sys.argv[1])
sources = find_sources(folder)
compare_all = room.compare_all
gc.disable()
def took(compared):
    room.compare_all = compare_all if compared else lambda history, *_: Findings()
    start = time.perf_counter()
    book = make_book(sources, folder)
    found = book.findings
    # All that a page or file may ask for.
    book.results, found.deltas, found.agreement, found.spreads
    return time.perf_counter() - start
took(True)
times = {False: [], True: []}
for _ in range(7):
    for compared in times:
        times[compared].append(took(compared))
print(min(times[True]), min(times[False]))
"""


def test_comparing_adds_less_than_a_quarter_to_reading_and_predicting(tmp_path: Path) -> None:
    write_logbook(tmp_path / "entries", entries=300, revisions=60, stages=10)
    whole, without = map(float, timed(["-c", COMPARED, "entries"], tmp_path).output.split())
    tell(f"with all comparisons {whole:.3f} s, without {without:.3f} s: {whole / without:.2f} times")
    assert whole <= 1.25 * without
