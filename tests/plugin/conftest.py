"""Projects to build, and the demonstration as it is built."""

from __future__ import annotations

from pathlib import Path

import pytest
from building import Project, build_site

ROOT = Path(__file__).parents[2]


@pytest.fixture
def project(tmp_path: Path) -> Project:
    """A site without any entry."""
    return Project(tmp_path)


@pytest.fixture(scope="session")
def demonstration(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The demonstration's site."""
    site = tmp_path_factory.mktemp("demonstration")
    build_site(ROOT / "mkdocs.yml", site)
    return site
