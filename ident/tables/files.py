"""Where the tables are, which edition they are, and how a file becomes checked rows."""

from __future__ import annotations

import csv
import math
from collections.abc import Callable, Iterator
from dataclasses import dataclass, fields
from functools import cache, partial
from pathlib import Path
from typing import Any, TypeVar, get_type_hints

from ..errors import TableError
from .elements import NUMBERS, WITH_LINES
from .own import OwnFile, OwnTables, digest, forget_tables, own_files
from .rows import KINDS

Row = TypeVar("Row")


@dataclass(frozen=True, kw_only=True)
class TableFile:
    """One table: its file, how many rows, how many bytes."""

    name: str
    rows: int
    size_bytes: int

    def __str__(self) -> str:
        return f"{self.name:<24}{self.rows:>7} rows"


@cache
def reference_folder() -> Path:
    """Folder of the tables: inside the package, or beside it in a checkout.

    Raises
    ------
    TableError
        When neither is there.
    """
    package = Path(__file__).resolve().parents[1]
    inside = package / "reference"
    if inside.is_dir():
        return inside
    beside = package.parent / "reference"
    if beside.is_dir() and (package.parent / "pyproject.toml").is_file():
        return beside
    raise TableError(f"the tables are missing; looked in {inside} and {beside}: install ident again", file="reference")


def edition() -> str:
    """Edition of the tables: the first heading of EDITIONS.md, such as 2026.12, and what own rows lie over them."""
    return _shipped_edition() if _own is None else f"{_shipped_edition()} with {_own.summary()}"


@cache
def _shipped_edition() -> str:
    path = reference_folder() / "EDITIONS.md"
    try:
        text = path.read_text(encoding="utf-8")
    except OSError as error:
        raise TableError("cannot be read", file=path.name) from error
    for line in text.splitlines():
        if line.startswith("## "):
            return line[3:].strip()
    raise TableError("holds no edition (a heading '## YEAR.MONTH')", file=path.name)


def list_tables() -> tuple[TableFile, ...]:
    """Every table with its number of rows."""
    out = []
    for path in sorted(reference_folder().glob("*.csv")):
        with path.open(encoding="utf-8", newline="") as stream:
            count = sum(1 for _ in csv.reader(stream)) - 1
        out.append(TableFile(name=path.name, rows=count, size_bytes=path.stat().st_size))
    return tuple(out)


def read_rows(name: str, kind: type[Row], folder: Path | None = None) -> tuple[Row, ...]:
    """Read a table into rows of a frozen dataclass whose fields are its columns.

    Raises
    ------
    TableError
        With file, line, column and value of the first cell that does not fit.
    """
    rows = _read(folder or reference_folder(), name, kind)
    if folder is not None or _own is None or not any(file.name == name for file in _own.files):
        return rows
    return _laid_over(rows, _read(_own.folder, name, kind))


def _read(folder: Path, name: str, kind: type[Row]) -> tuple[Row, ...]:
    path = folder / name
    try:
        return tuple(_rows(path, kind))
    except (UnicodeDecodeError, csv.Error) as error:
        raise TableError("is no CSV text in UTF-8", file=path.name) from error


def _laid_over(shipped: tuple[Row, ...], own: tuple[Row, ...]) -> tuple[Row, ...]:
    """Shipped rows with those of the same key replaced, and the new ones after them."""
    rows = {_key(row): row for row in shipped}
    rows.update((_key(row), row) for row in own)
    return tuple(rows.values())


def _key(row: object) -> tuple[Any, ...]:
    return tuple(getattr(row, column) for column in type(row).unique_by)  # type: ignore[attr-defined]


_own: OwnTables | None = None


def own_tables() -> OwnTables | None:
    """Tables of the user's that lie over the shipped ones, None when there are none."""
    return _own


def own_tables_told() -> dict[str, Any] | None:
    """The same as plain data for an answer."""
    if _own is None:
        return None
    files = [{"name": file.name, "replaced": file.replaced, "added": file.added} for file in _own.files]
    return {"folder": str(_own.folder), "sha256": _own.sha256, "files": files}


def use_tables(folder: Path | str | None) -> None:
    """Lay a user's own tables over the shipped ones, row by row; None goes back to the shipped ones.

    A row whose key (the columns that tell rows of its table apart) is that of a shipped row stands in its place,
    others are added; `sources.csv` adds sources that the rows may name. Everything made of tables is made anew.

    Raises
    ------
    TableError
        When the folder holds no table, one that the program does not read, or a malformed row: with file, line and
        column. The tables in use stay as they were.
    """
    global _own
    found = None if folder is None else _checked_tables(Path(folder))
    if found != _own:
        _own = found
        forget_tables()


def _checked_tables(folder: Path) -> OwnTables:
    from .rows import READ

    paths = own_files(folder, frozenset(READ))
    files = []
    for path in paths:
        kind: type[object] = READ[path.name]
        shipped = {_key(row) for row in _read(reference_folder(), path.name, kind)}
        try:
            own = [_key(row) for row in _read(folder, path.name, kind)]
        except TableError as bad:  # of two files of this name: say which
            raise TableError(bad.what, file=str(path), line=bad.line, column=bad.column, value=bad.value) from None
        replaced = sum(key in shipped for key in own)
        files.append(OwnFile(name=path.name, replaced=replaced, added=len(own) - replaced))
    _check_rivals(folder)
    return OwnTables(folder=folder, sha256=digest(paths), files=tuple(files))


def _rows(path: Path, kind: type[Row]) -> Iterator[Row]:
    names = [field.name for field in fields(kind)]  # type: ignore[arg-type]
    types = get_type_hints(kind)
    try:
        stream = path.open(encoding="utf-8", newline="")
    except OSError as error:
        raise TableError("cannot be read", file=path.name) from error
    with stream:
        reader = csv.reader(stream)
        header = next(reader, [])
        if header != names:
            raise TableError(f"columns must be {','.join(names)}", file=path.name, line=1, value=",".join(header))
        readers = [_reader(path, kind, name, types[name]) for name in names]
        seen: dict[tuple[Any, ...], int] = {}
        for cells in reader:
            line = reader.line_num
            if len(cells) != len(names):
                raise TableError(f"has {len(cells)} cells, not {len(names)}", file=path.name, line=line)
            values: dict[str, Any] = {}
            for name, read, cell in zip(names, readers, cells, strict=True):
                try:
                    values[name] = read(cell)
                except ValueError as error:
                    raise TableError(str(error), file=path.name, line=line, column=name, value=cell) from None
            _once(path, line, kind, values, seen)
            yield _checked(path, line, kind, values)


def _reader(path: Path, kind: type[Row], column: str, of: Any) -> Callable[[str], Any]:
    """What makes a cell of a column into a value, or raises ValueError."""
    if column == "symbol":
        return partial(_symbol, also=getattr(kind, "also", ()))
    if column == "source":
        return partial(_source, known=_source_keys(path.parent))
    return _kind if column == "kind" else _READERS[of]


def _once(path: Path, line: int, kind: type[Row], values: dict[str, Any], seen: dict[tuple[Any, ...], int]) -> None:
    """Refuse a second row with the same key."""
    columns: tuple[str, ...] = getattr(kind, "unique_by", ())
    key = tuple(values[column] for column in columns)
    first = seen.setdefault(key, line)
    if first != line:
        value = " ".join(str(part) for part in key)
        raise TableError(
            f"stands in line {first} already", file=path.name, line=line, column=", ".join(columns), value=value
        )


def _checked(path: Path, line: int, kind: type[Row], values: dict[str, Any]) -> Row:
    symbol, z = values.get("symbol"), values.get("z")
    if z is not None and NUMBERS[symbol or ""] != z:
        what = f"is not the atomic number of {symbol}, {NUMBERS[symbol or '']}"
        raise TableError(what, file=path.name, line=line, column="z", value=str(z))
    try:
        return kind(**values)
    except ValueError as error:
        column, _, what = str(error).partition(": ")
        raise TableError(what, file=path.name, line=line, column=column, value=str(values.get(column))) from None


def _check_rivals(folder: Path) -> None:
    """Refuse own rivals that name a line which neither the shipped tables nor the user's have."""
    path = folder / "rivals.csv"
    if not path.is_file():
        return
    from .rows import Line, Rival

    lines = _read(reference_folder(), "lines.csv", Line)
    if (folder / "lines.csv").is_file():
        lines += _read(folder, "lines.csv", Line)
    there = {(line.symbol, line.transition) for line in lines}
    for number, row in enumerate(_read(folder, "rivals.csv", Rival), start=2):
        named = [("transition", row.symbol, row.transition), ("rival_transition", row.rival, row.rival_transition)]
        deciding = [("decided_by", row.symbol), ("weakly_by", row.symbol), ("ruled_out_by", row.rival)]
        named += [(column, symbol, getattr(row, column)) for column, symbol in deciding if getattr(row, column)]
        for column, symbol, transition in named:
            if (symbol, transition) not in there:
                what = f"is no line of {symbol} in lines.csv"
                raise TableError(what, file=str(path), line=number, column=column, value=transition)


def _source_keys(folder: Path) -> frozenset[str]:
    """Keys that rows of a folder may name: the shipped ones, and those of its own sources.csv."""
    keys: set[str] = set()
    for path in {reference_folder() / "sources.csv", folder / "sources.csv"}:
        if path.is_file():
            with path.open(encoding="utf-8", newline="") as stream:
                keys |= {row.get("key") or "" for row in csv.DictReader(stream)}
    return frozenset(keys)


def _symbol(cell: str, *, also: tuple[str, ...]) -> str:
    if cell not in WITH_LINES and cell not in also:
        raise ValueError("is no element from Li to U")
    return cell


def _source(cell: str, *, known: frozenset[str]) -> str:
    if not cell or any(key not in known for key in cell.split(" ")):
        raise ValueError("is no key of sources.csv, to which a sources.csv beside this file may add")
    return cell


def _kind(cell: str) -> str:
    if cell not in KINDS:
        raise ValueError(f"must be one of {', '.join(sorted(KINDS))}")
    return cell


def _number(cell: str) -> float:
    try:
        value = float(cell)
    except ValueError:
        raise ValueError("is not a number") from None
    if not math.isfinite(value):
        raise ValueError("is not a finite number")
    return value


def _optional(cell: str) -> float | None:
    return None if cell == "" else _number(cell)


def _integer(cell: str) -> int:
    if not cell.lstrip("-").isdigit():
        raise ValueError("is not a whole number")
    return int(cell)


def _optional_integer(cell: str) -> int | None:
    return None if cell == "" else _integer(cell)


def _text(cell: str) -> str:
    return cell


def _flag(cell: str) -> bool:
    if cell not in {"0", "1"}:
        raise ValueError("must be 0 or 1")
    return cell == "1"


_READERS: dict[Any, Any] = {
    float: _number,
    float | None: _optional,
    int: _integer,
    int | None: _optional_integer,
    str: _text,
    bool: _flag,
}
