"""`--figure PATH`: where the figure of each spectrum goes. What cannot work is said before anything is read."""

from __future__ import annotations

import os
import re
from pathlib import Path
from typing import TYPE_CHECKING

import click

from ..errors import InputError
from ..report.escape import printable

if TYPE_CHECKING:
    from ..identification import Examination

ENDINGS = (".png", ".svg", ".pdf")
LONGEST_NAME = 80


class Figures:
    """The files that figures are written to: one named file, or one .png a spectrum in a folder.

    Parameters
    ----------
    path : str
        As given: ends in .png, .svg or .pdf, or names a folder, which is made when it is not there.
    inputs : int
        How many inputs were named.
    """

    def __init__(self, path: str, inputs: int) -> None:
        self._path = Path(path)
        self.single = self._path.suffix.lower() in ENDINGS and not self._path.is_dir()
        self._used: set[str] = set()
        shown = printable(path)
        if self.single:
            if inputs > 1:
                raise click.UsageError(f"--figure {shown} is one file, and there are {inputs} inputs; name a folder")
            self._check_folder(self._path.parent, shown)
        elif self._path.suffix and not self._path.is_dir() and not path.endswith(("/", os.sep)):
            raise click.UsageError(
                f"--figure {shown}: figures are png, svg or pdf; end the name in one of these, or name a folder"
            )
        else:
            self._make_folder(shown)

    def draw(self, examination: Examination) -> None:
        """Write the figure of one spectrum."""
        from ..report import draw_figure

        draw_figure(examination, self._path if self.single else self._place(examination.answer.spectrum))

    def _place(self, spectrum: str) -> Path:
        """A file name made of the spectrum's, that this call has not used yet."""
        name, _, number = spectrum.rpartition("#")
        name, number = (name, number) if name and number.isdigit() else (spectrum, "")
        stem = "standard_input" if name == "-" else re.sub(r"[^\w.-]+", "_", Path(name).stem)[:LONGEST_NAME]
        base = (stem.lstrip(".-") or "spectrum") + (f"_{number}" if number else "")
        chosen, more = base, 2
        while chosen.lower() in self._used:
            chosen, more = f"{base}_{more}", more + 1
        self._used.add(chosen.lower())
        return self._path / f"{chosen}.png"

    def _make_folder(self, shown: str) -> None:
        try:
            self._path.mkdir(parents=True, exist_ok=True)
        except OSError as failed:
            raise InputError(
                f"--figure {shown}: the folder cannot be made ({failed.strerror}); name one that can be written to"
            ) from None
        self._check_folder(self._path, shown)

    @staticmethod
    def _check_folder(folder: Path, shown: str) -> None:
        if not folder.is_dir():
            raise InputError(f"--figure {shown}: there is no folder {printable(str(folder))}; make it first")
        if not os.access(folder, os.W_OK | os.X_OK):
            raise InputError(f"--figure {shown}: the folder cannot be written to; name one that can")
