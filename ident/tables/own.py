"""A user's own tables over the shipped ones, row by row, and what is kept of tables until then."""

from __future__ import annotations

import hashlib
from collections.abc import Callable
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import Any, TypeVar

from ..errors import TableError

Function = TypeVar("Function", bound=Callable[..., Any])

# Tables that others are derived from: a change to them does nothing until the tables are rebuilt.
ONLY_FOR_REBUILDING = ("binding_energies.csv", "families.csv", "published_lines.csv", "published_sensitivities.csv")

_forgetting: list[Callable[[], None]] = []


@dataclass(frozen=True, kw_only=True)
class OwnFile:
    """One table of the user's own."""

    name: str
    replaced: int  # rows that stand for a shipped one
    added: int


@dataclass(frozen=True, kw_only=True)
class OwnTables:
    """The user's own tables that lie over the shipped ones."""

    folder: Path
    sha256: str  # of the files' names and bytes
    files: tuple[OwnFile, ...]

    def summary(self) -> str:
        """Say what they are: "own rows from tables/: lines.csv 1 replaced, 2 added"."""
        told = ", ".join(f"{file.name} {file.replaced} replaced, {file.added} added" for file in self.files)
        return f"own rows from {self.folder}: {told}; sha256 {self.sha256[:12]}"


def cached(function: Function) -> Function:
    """Keep what a function makes of the tables, until other tables are taken."""
    kept = cache(function)
    _forgetting.append(kept.cache_clear)
    return kept  # type: ignore[return-value]


def forget_tables() -> None:
    """Drop everything that was made of the tables, so that it is made anew."""
    for forget in _forgetting:
        forget()


def own_files(folder: Path, known: frozenset[str]) -> list[Path]:
    """Give the tables in a folder of the user's, refused when there is none or one that nothing would read.

    Raises
    ------
    TableError
        When the folder is missing, holds no table, or holds one that the program does not read.
    """
    if not folder.is_dir():
        raise TableError("is no folder; name one that holds tables such as lines.csv", file=str(folder))
    files = sorted(folder.glob("*.csv"))
    if not files:
        raise TableError(f"holds no table; there are {', '.join(sorted(known))}", file=str(folder))
    for path in files:
        if path.name in ONLY_FOR_REBUILDING:
            what = (
                "is read only when tables are rebuilt; give lines.csv, sensitivities.csv or another derived one instead"
            )
            raise TableError(what, file=str(path))
        if path.name not in known:
            raise TableError(f"is no table that ident reads; there are {', '.join(sorted(known))}", file=str(path))
    return files


def digest(files: list[Path]) -> str:
    """SHA-256 of names and bytes."""
    total = hashlib.sha256()
    for path in files:
        total.update(path.name.encode() + b"\0" + path.read_bytes() + b"\0")
    return total.hexdigest()
