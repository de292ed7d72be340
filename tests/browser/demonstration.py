"""The demonstration's site, built by the command itself, and a browser to look at it with."""

from __future__ import annotations

import shutil
import subprocess
import sys
from pathlib import Path

ROOT = Path(__file__).parents[2]
ARGUMENTS = ("--no-sandbox", "--disable-gpu", "--disable-dev-shm-usage")


def chromium() -> str | None:
    """Where this machine has its Chromium."""
    return shutil.which("chromium") or shutil.which("chromium-browser") or shutil.which("google-chrome")


def build(project: Path, site: Path) -> None:
    """Build the site; one that has problems is built too, and its command then ends with 1."""
    command = [sys.executable, "-m", "mkdocs", "build", "--quiet", "--site-dir", str(site)]
    done = subprocess.run(command, cwd=project, capture_output=True, text=True, check=False)
    if not (site / "data" / "results.json").is_file():
        raise RuntimeError(done.stderr)
