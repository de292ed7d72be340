"""Commands timed from outside: wall time and peak memory of a process of its own."""

from __future__ import annotations

import json
import os
import subprocess
import sys
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import NamedTuple

# A process inherits the peak of the one that starts it, so a small one stands between pytest and what is measured.
LAUNCHER = """
import json, resource, subprocess, sys, time
start = time.perf_counter()
done = subprocess.run([sys.executable, *sys.argv[1:]], stdout=subprocess.PIPE, stderr=subprocess.STDOUT)
seconds = time.perf_counter() - start
peak = resource.getrusage(resource.RUSAGE_CHILDREN).ru_maxrss / 1024
print(json.dumps([done.returncode, seconds, peak, done.stdout.decode()]))
"""


class Timed(NamedTuple):
    """What a process took."""

    seconds: float
    peak_mib: float
    output: str


def timed(arguments: Sequence[str], folder: Path, **environment: str) -> Timed:
    """Run this Python with the arguments and measure it; it has to end well."""
    known = {**os.environ, "SOURCE_DATE_EPOCH": "1700000000", "NO_MKDOCS_2_WARNING": "1", **environment}
    # What is installed is compiled once, when it is installed; so it is here, by the first of several runs.
    known.pop("PYTHONDONTWRITEBYTECODE", None)
    command = [sys.executable, "-S", "-c", LAUNCHER, *arguments]
    done = subprocess.run(command, cwd=folder, env=known, stdout=subprocess.PIPE, check=True)
    status, seconds, peak, output = json.loads(done.stdout)
    assert status == 0, output
    return Timed(seconds, peak, output)


def best(runs: int, measure: Callable[[], Timed]) -> Timed:
    """The quickest of several runs: whatever else the machine was doing only ever adds."""
    return min((measure() for _ in range(runs)), key=lambda each: each.seconds)


def tell(figures: str) -> None:
    """Show a figure whether or not the test passes; pytest -s prints it at once."""
    print(f"\n  {figures}", flush=True)
