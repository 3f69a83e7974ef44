"""Copies of the tables to damage, and one rebuild for all tests that need it."""

from __future__ import annotations

import csv
import shutil
from pathlib import Path

import pytest

from ident.tables import reference_folder


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    """A copy of the tables."""
    return Path(shutil.copytree(reference_folder(), tmp_path / "reference"))


@pytest.fixture(scope="session")
def cells() -> dict[str, list[dict[str, str]]]:
    """Every table as plain cells, read without the loader."""
    out = {}
    for path in sorted(reference_folder().glob("*.csv")):
        with path.open(encoding="utf-8", newline="") as stream:
            out[path.name] = list(csv.DictReader(stream))
    return out


@pytest.fixture(scope="session")
def rebuilt() -> dict[str, str]:
    """The derived tables made anew, once for all tests."""
    from ident.deriving import derived_tables

    return derived_tables()
