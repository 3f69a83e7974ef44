"""Files to spectra: one module a format, recognised by what the file holds and not by its name."""

from __future__ import annotations

from dataclasses import replace
from os import PathLike
from typing import IO

from ..errors import SettingError
from ..spectrum import Kind, Ordinate, Spectrum
from .delimited import list_table_columns, read_delimited
from .iso14976 import is_iso14976
from .iso14976_spectra import list_iso14976_columns, read_iso14976
from .source import read_source

__all__ = ["list_columns", "read_spectra", "read_spectrum"]

FilePath = str | PathLike[str]


def read_spectra(
    path: FilePath,
    *,
    column: str | None = None,
    kind: Kind = "auto",
    ordinate: Ordinate = "auto",
    separate: bool = False,
    stream: IO[bytes] | None = None,
) -> tuple[Spectrum, ...]:
    """Read every spectrum of a file.

    Parameters
    ----------
    path : str or path
        A text table or an ISO 14976 file; "-" reads standard input.
    column : str, optional
        Which ordinate of several: its name, its number counted from 1, or "sum" for all sweeps. By default
        the first ordinate, and a warning that names the others.
    kind : "auto", "direct" or "derivative"
        Overrules what the file says. "auto" stays in the spectrum when the file says nothing.
    ordinate : "auto", "n" or "en"
        N(E) or E N(E); overrules what the file says.
    separate : bool
        Make every window, sweep or block a spectrum of its own ("file#1", "file#2", ...). Otherwise windows
        are parts of one spectrum, and repeated sweeps of one range are summed.
    stream : binary stream, optional
        Read instead of standard input when `path` is "-".

    Returns
    -------
    tuple of Spectrum
        At least one. The second is named "file#2". Energies are kinetic, in eV, ascending. What was decided
        or left out on the way is in `Spectrum.warnings`.

    Raises
    ------
    InputError
        When the file cannot be read or holds no usable spectrum: one line with file, line and remedy.
    SettingError
        When `kind` or `ordinate` is none of the words above.
    """
    _check_word("kind", kind, ("auto", "direct", "derivative"))
    _check_word("ordinate", ordinate, ("auto", "n", "en"))
    source = read_source(path, stream)
    if is_iso14976(source):
        return read_iso14976(source, column=column, kind=kind, ordinate=ordinate, separate=separate)
    return read_delimited(source, column=column, kind=kind, ordinate=ordinate, separate=separate)


def read_spectrum(
    path: FilePath,
    *,
    column: str | None = None,
    kind: Kind = "auto",
    ordinate: Ordinate = "auto",
    separate: bool = False,
    stream: IO[bytes] | None = None,
) -> Spectrum:
    """Read the only or the first spectrum of a file; a warning says when there are more.

    Parameters and errors are those of `read_spectra`.
    """
    spectra = read_spectra(path, column=column, kind=kind, ordinate=ordinate, separate=separate, stream=stream)
    first = spectra[0]
    if len(spectra) == 1:
        return first
    more = f"the file holds {len(spectra)} spectra: this is the first, read_spectra gives them all"
    return replace(first, warnings=(*first.warnings, more))


def list_columns(path: FilePath, *, stream: IO[bytes] | None = None) -> tuple[str, ...]:
    """Names of the columns of a file in order, "column 3" where it gives none.

    For an ISO 14976 file these are the ordinates of its first spectrum. Errors are those of `read_spectra`.
    """
    source = read_source(path, stream)
    return list_iso14976_columns(source) if is_iso14976(source) else list_table_columns(source)


def _check_word(setting: str, word: str, allowed: tuple[str, ...]) -> None:
    if word not in allowed:
        raise SettingError(f"{setting} {word!r} is unknown; it is one of {', '.join(allowed)}")
