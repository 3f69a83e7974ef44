"""Text tables: two or more columns of numbers, energy and ordinate among them."""

from __future__ import annotations

import itertools
from collections.abc import Sequence
from dataclasses import dataclass
from functools import reduce
from typing import NoReturn

import numpy as np

from ..spectrum import FloatArray, Header, Kind, Ordinate, Spectrum
from .assemble import build_spectrum, number_names, to_windows
from .cells import looks_grouped
from .checks import BINDING, BINDING_REMEDY, MIN_TOTAL, check_axis_name
from .columns import Choice, choose_columns
from .names import role_of
from .remarks import guess_counts, guess_kind, guess_ordinate, read_header
from .scans import MIN_POINTS, Scan
from .source import Source
from .table import Row, Table, read_table


@dataclass(frozen=True, kw_only=True)
class _Facts:
    """What the header says of all spectra of the file."""

    kind: Kind
    ordinate: Ordinate
    header: Header


def read_delimited(
    source: Source, *, column: str | None, kind: Kind, ordinate: Ordinate, separate: bool
) -> tuple[Spectrum, ...]:
    """Read a text table; its windows are one spectrum, or one each with `separate`.

    Raises
    ------
    InputError
        When the text is no table, or its numbers cannot be a spectrum.
    """
    table = read_table(source)
    energies, found = _find_energies(table)
    counted = 1 if found else 0
    choice = choose_columns(table.names, column, source, energies=energies, passed=counted)
    _check_axis(table, choice, source)
    _refuse_double_commas(table, source)
    scans = _read_scans(table, choice, source)
    windows = to_windows(scans, source)
    name = table.names[choice.ordinates[0]] if table.named else ""
    facts = _Facts(
        kind=guess_kind(name, table.names, table.texts) if kind == "auto" else kind,
        ordinate=guess_ordinate(name, table.texts) if ordinate == "auto" else ordinate,
        header=read_header(table.texts),
    )
    counts = guess_counts(name, all(_is_whole(scan.intensity) for scan in windows), facts.kind)
    warnings = [*found, *choice.warnings]
    if not separate:
        return (_build(windows, source, facts, counts, warnings),)
    long_enough = [window for window in windows if len(window) >= MIN_TOTAL] or windows
    if len(long_enough) < len(windows):
        warnings.append(f"{len(windows) - len(long_enough)} windows of fewer than {MIN_TOTAL} points left out")
    spectra = [_build([window], source, facts, counts, warnings) for window in long_enough]
    return number_names(spectra, source, from_first=True)


def list_table_columns(source: Source) -> tuple[str, ...]:
    """Names of the columns of a text table."""
    return read_table(source).names


def _build(windows: list[Scan], source: Source, facts: _Facts, counts: bool | None, warnings: list[str]) -> Spectrum:
    return build_spectrum(
        windows,
        source,
        kind=facts.kind,
        ordinate=facts.ordinate,
        counts=counts,
        header=facts.header,
        warnings=warnings,
    )


def _is_whole(values: FloatArray) -> bool:
    return bool(np.all((values >= 0) & (values == np.floor(values))))


def _find_energies(table: Table) -> tuple[list[int], list[str]]:
    """Find the energy columns: those named so and in order, else the first that does not count the rows."""
    if table.named:
        said = [at for at, name in enumerate(table.names) if role_of(name) == "energy"]
        ordered = [at for at in said if _is_ordered(_column(table, at))]
        if ordered or (said and not _is_ordered(_column(table, 0))):
            return ordered or said[:1], []
        return [0], []
    if len(table.names) > 2:
        first, second = _column(table, 0), _column(table, 1)
        counted = np.array_equal(first - first[:1], np.arange(first.size)) and first[0] in (0, 1)
        if counted and _is_even(second):
            return [1], ["column 1 counts the rows: column 2 was taken as the energy"]
    return [0], []


def _column(table: Table, at: int) -> FloatArray:
    """Read a column leniently, NaN for what is no number."""
    values = (row.values[at] if at < len(row.values) else None for row in table.rows)
    return np.array([np.nan if value is None else value for value in values], dtype=np.float64)


def _is_ordered(values: FloatArray) -> bool:
    """Tell whether a column runs one way apart from a few restarts."""
    signs = np.sign(np.diff(values[np.isfinite(values)]))
    return bool(signs.size and abs(signs.sum()) >= (1 - 2 / MIN_POINTS) * signs.size)


def _is_even(values: FloatArray) -> bool:
    steps = np.diff(values)
    if not (steps.size and np.all(np.isfinite(steps))):
        return False
    middle = float(np.median(steps))
    return middle != 0 and bool(np.mean(np.abs(steps - middle) <= 0.05 * abs(middle)) > 0.9)


def _check_axis(table: Table, choice: Choice, source: Source) -> None:
    """Refuse an axis that the header calls binding energy or keV."""
    energy = choice.energy or 0
    if table.named and role_of(table.names[energy]) == "energy":
        check_axis_name(table.names[energy], source, line=table.names_line)
        return
    said = " ".join(table.texts).casefold()
    if "binding" in said and BINDING.search(said) and "kinetic" not in said:
        source.fail("the header speaks of binding energies", remedy=BINDING_REMEDY)


def _read_scans(table: Table, choice: Choice, source: Source) -> list[Scan]:
    """Read the chosen columns, block by block; every cell must be a number."""
    energy_at = choice.energy or 0
    wanted = (energy_at, *choice.ordinates)
    kept = [row for row in table.rows if any(row.cells[at : at + 1] not in ((), ("",)) for at in wanted)]
    if not kept:
        source.fail(f"column {table.names[choice.ordinates[0]]!r} is empty", remedy="choose another with --column")
    for at in wanted:
        cells = [row.cells[at] for row in kept if at < len(row.cells)]
        _check_grouping(cells, [row.line for row in kept if at < len(row.cells)], table, source)
    energy = np.array(_numbers(table, kept, energy_at, source))
    columns = [np.array(_numbers(table, kept, at, source)) for at in choice.ordinates]
    intensity = reduce(np.add, columns)
    line = np.array([row.line for row in kept], dtype=np.int64)
    block = np.array([row.block for row in kept])
    cuts = [0, *(np.flatnonzero(np.diff(block)) + 1).tolist(), len(kept)]
    whole = Scan(energy_ev=energy, intensity=intensity, line=line)
    return [whole[low:high] for low, high in itertools.pairwise(cuts)]


def _numbers(table: Table, rows: Sequence[Row], at: int, source: Source) -> list[float]:
    """Read one column; the first cell that is no number is an error with its line."""
    values = []
    for row in rows:
        value = row.values[at] if at < len(row.values) else None
        if value is None:
            _refuse_cell(table, row.line, row.cells[at] if at < len(row.cells) else "", at, source)
        values.append(value)
    return values


def _refuse_cell(table: Table, line: int, cell: str, at: int, source: Source) -> NoReturn:
    """Say what is wrong with a cell."""
    place = f"column {at + 1}" if not table.named else f"column {at + 1} ({table.names[at]})"
    if not cell:
        source.fail(f"no value in {place}", line=line, remedy="remove the row, or export the file again if it was cut")
    shown = repr(cell if len(cell) <= 30 else cell[:27] + "...")
    if any(mark in cell for mark in ".,") and any(char.isdigit() for char in cell):
        remedy = "write all numbers with one decimal sign and no thousands separators"
    else:
        remedy = "repair or remove the row"
    source.fail(f"{shown} in {place} is not a finite number", line=line, remedy=remedy)


def _check_grouping(cells: list[str], lines: list[int], table: Table, source: Source) -> None:
    """Refuse a column whose numbers read as thousands as well as decimals."""
    cell = looks_grouped(cells, table.dialect)
    if cell is not None:
        source.fail(
            f"{cell!r} could be {cell.replace(table.dialect.decimal, '')} or {cell.replace(',', '.')}",
            line=lines[cells.index(cell)],
            remedy="write the numbers without thousands separators",
        )


def _refuse_double_commas(table: Table, source: Source) -> None:
    """Refuse a table whose comma seems to be separator and decimal sign at once ("100,5,2000,3")."""
    if table.dialect.separator != "," or len(table.names) < 3:
        return
    if any(not cell.lstrip("+-").isdecimal() for row in table.rows for cell in row.cells):
        return
    joined = np.array([float(f"{row.cells[0]}.{row.cells[1].lstrip('+-')}") for row in table.rows])
    if _is_even(joined) and not _is_even(_column(table, 0)):
        source.fail(
            "the comma seems to be both the separator and the decimal sign",
            line=table.rows[0].line,
            remedy="put semicolons or tabs between the columns",
        )
