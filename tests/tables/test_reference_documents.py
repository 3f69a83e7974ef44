"""What reference/README.md and reference/EDITIONS.md say of the tables is so."""

from __future__ import annotations

import re

import pytest

from ident import tables
from ident.deriving.deviations import corrections
from ident.deriving.families import residuals

Cells = dict[str, list[dict[str, str]]]
README = (tables.reference_folder() / "README.md").read_text(encoding="utf-8")
EDITIONS = (tables.reference_folder() / "EDITIONS.md").read_text(encoding="utf-8")
NEWEST = EDITIONS.split("\n## ")[1]


def test_every_table_has_its_paragraph() -> None:
    described = set(re.findall(r"^## (\S+\.csv)$", README, flags=re.MULTILINE))
    assert described == {table.name for table in tables.list_tables()}


@pytest.mark.parametrize("name", [table.name for table in tables.list_tables()])
def test_every_column_is_named_in_its_paragraph(name: str, cells: Cells) -> None:
    paragraph = README.split(f"## {name}\n")[1].split("\n## ")[0]
    columns = re.findall(r"`(\w+)`", paragraph)
    assert set(cells[name][0]) <= set(columns)


def test_the_newest_edition_counts_the_rows() -> None:
    counted = dict(re.findall(r"^\| (\S+\.csv) \| (\d+) \|$", NEWEST, flags=re.MULTILINE))
    assert counted == {table.name: str(table.rows) for table in tables.list_tables()}


def test_the_newest_edition_gives_the_scatter_of_each_family() -> None:
    """The scatter itself is worked out anew in test_derived.py."""
    rows = re.findall(r"^\| (.+?) \| (\d+) \| [^|]* \| [^|]* \| [^|]* \| (\S+) \|$", NEWEST, flags=re.MULTILINE)
    told = {name: (int(count), scatter) for name, count, scatter in rows}
    fitted = corrections()
    assert told == {
        name: (len(residuals(name)), f"{fitted[name].leave_one_out_ev:.1f}" if name in fitted else "-")
        for name in tables.families()
    }
