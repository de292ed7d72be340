"""Reading and computing, against what loading the same YAML costs in any case."""

from __future__ import annotations

from pathlib import Path

import pytest
from generate import write_logbook
from timed import best, tell, timed

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
    check = best(5, lambda: timed(["-m", "logbook", "check", "entries"], tmp_path))
    floor = best(5, lambda: timed(["-c", LOAD, "entries"], tmp_path))
    tell(f"check {check.seconds:.2f} s, loading alone {floor.seconds:.2f} s: {check.seconds / floor.seconds:.2f} times")
    assert check.seconds <= 3 * floor.seconds
