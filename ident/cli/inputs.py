"""Spectra named on the command line: read one after the other; one that fails does not stop the rest."""

from __future__ import annotations

import sys
from collections.abc import Callable, Iterable, Iterator, Sequence
from dataclasses import dataclass, field
from typing import Any

import click

from ..errors import InputError
from ..readers import read_spectra
from ..spectrum import Spectrum
from .say import complain, on_terminal, warn

Answer = Callable[[Spectrum], tuple[bool, Sequence[str]]]

ANSWERED, NOT_READ, NOTHING = 0, 1, 3


@dataclass(frozen=True, kw_only=True)
class Reading:
    """How the files of a call are to be read."""

    kind: Any = "auto"
    ordinate: Any = "auto"
    column: str | None = None
    separate: bool = False
    within: tuple[float, float] | None = None
    quiet: bool = False
    one_figure: bool = False  # True: the answer is drawn into one file, so that one spectrum may come

    def spectra_of(self, path: str) -> tuple[Spectrum, ...]:
        """Read the spectra of one file, or of standard input for "-"."""
        stream = sys.stdin.buffer if path == "-" else None
        spectra = read_spectra(
            path,
            column=self.column,
            kind=self.kind,
            ordinate=self.ordinate,
            separate=self.separate,
            stream=stream,
        )
        if self.one_figure and len(spectra) > 1:
            raise InputError(
                f"holds {len(spectra)} spectra, and --figure names one file", source=path, remedy="name a folder"
            )
        if self.within is None:
            return spectra
        return tuple(spectrum.crop(*self.within) for spectrum in spectra)


@dataclass(kw_only=True)
class Tally:
    """What became of the inputs, for the exit code."""

    failed: int = 0
    answered: list[bool] = field(default_factory=list)  # whether anything stood above the noise

    def exit_code(self) -> int:
        """0 answered, 1 an input failed, 3 nothing above the noise in any."""
        if self.failed:
            return NOT_READ
        return ANSWERED if any(self.answered) else NOTHING


def answer_each(
    paths: Sequence[str],
    reading: Reading,
    answer: Answer,
    *,
    beforehand: Callable[[Sequence[Spectrum]], None] | None = None,
) -> int:
    """Put a question to every spectrum of every file, and give the exit code.

    Parameters
    ----------
    paths : sequence of str
        Files as named; "-" is standard input.
    reading : Reading
        How to read them.
    answer : callable
        Writes the answer for one spectrum; gives whether anything stood above the noise, and the warnings.
    beforehand : callable, optional
        Is given all spectra before the first is answered, for questions that look at several at once.
    """
    tally = Tally()
    coming: Iterable[Spectrum] = _spectra(paths, reading, tally)
    if beforehand is not None:
        coming = list(coming)
        beforehand(coming)
    for spectrum in coming:
        _answer_one(spectrum, reading, answer, tally)
    return tally.exit_code()


def _spectra(paths: Sequence[str], reading: Reading, tally: Tally) -> Iterator[Spectrum]:
    """Read one file after the other; say of each that cannot be read why."""
    for place, path in enumerate(paths):
        _progress(place, paths, reading)
        try:
            spectra = reading.spectra_of(path)
        except InputError as failed:
            complain(str(failed))
            tally.failed += 1
            continue
        yield from spectra


def _answer_one(spectrum: Spectrum, reading: Reading, answer: Answer, tally: Tally) -> None:
    try:
        seen, warnings = answer(spectrum)
    except (ArithmeticError, LookupError, ValueError) as bug:
        # a fault of the program, not of the file: say so on one line, and answer the other inputs
        complain(f"{spectrum.name}: could not be worked out ({type(bug).__name__}: {bug}); please report this")
        tally.failed += 1
        return
    except InputError as failed:
        if not failed.source:
            failed = InputError(failed.what, source=spectrum.name, line=failed.line, remedy=failed.remedy)
        complain(str(failed))
        tally.failed += 1
        return
    tally.answered.append(seen)
    if not reading.quiet and not on_terminal():
        for text in dict.fromkeys(warnings):
            warn(f"{spectrum.name}: {text}")


def _progress(place: int, paths: Sequence[str], reading: Reading) -> None:
    """Say which file is next, on a terminal, when there are many and the answers go elsewhere."""
    if len(paths) > 3 and not reading.quiet and sys.stderr.isatty() and not sys.stdout.isatty():
        click.echo(f"\r{place + 1} of {len(paths)}", nl=place + 1 == len(paths), err=True)
