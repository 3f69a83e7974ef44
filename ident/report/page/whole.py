"""The whole page: one file, nothing loaded from anywhere, at most 5 MB."""

from __future__ import annotations

import base64
import hashlib
from collections.abc import Mapping, Sequence
from importlib.resources import files
from pathlib import Path
from string import Template
from typing import TYPE_CHECKING, Any

from ...errors import IdentError, InputError
from ...identification.build import edition
from .about import About
from .doubts import cautions
from .image import Image, image_figure
from .marks import key_of_marks, symbols
from .markup import Markup, el, group, script_data, text
from .matrix import matrix
from .repeat import INDICATIVE, STANDARDS, whole_list
from .shades import shades, variables
from .sheet import Sheet, article, drawn, make_sheet

if TYPE_CHECKING:
    from ...identification import Examination

MOST_BYTES = 5_000_000
SCRIPTS = ("curves.js", "drawing.js", "page.js")
MOST_FIGURES = 8  # more spectra are printed without their figures
LEFT_OUT = "With so many spectra, the reasons of elements that are only possible are left out; fewer have them."
NEEDED = "a page needs bokeh, which is not installed; pip install 'auger-ident[page]', or '.[page]' in a checkout"


def check_library() -> None:
    """Say at once when the plotting library is missing; IdentError names what to install."""
    from importlib.util import find_spec

    if find_spec("bokeh") is None:
        raise IdentError(NEEDED)


class Page:
    """Spectra that are to be shown in one page.

    Parameters
    ----------
    about : About, optional
        What the analyst adds: header, decisions, spots.
    image : Image, optional
        Shown with the spots marked.
    reading : mapping, optional
        How the files were read: option and value.
    command : str, optional
        The command line that makes the same page.
    inputs : sequence of str, optional
        Files as named, those that could not be read included.
    """

    def __init__(
        self,
        *,
        about: About | None = None,
        image: Image | None = None,
        reading: Mapping[str, Any] | None = None,
        command: str | None = None,
        inputs: Sequence[str] = (),
    ) -> None:
        check_library()
        self._about, self._image = about or About(), image
        self._reading, self._command, self._inputs = reading or {}, command, tuple(inputs)
        self._sheets: list[Sheet] = []
        self._figures: list[bytes] = []
        self._draws = len(self._inputs) <= MOST_FIGURES

    def __len__(self) -> int:
        return len(self._sheets)

    def add(self, examination: Examination) -> None:
        """Add one spectrum; nothing of the examination is kept but what is shown."""
        self._sheets.append(make_sheet(examination, len(self._sheets), self._about, self._reading))
        self._draws = self._draws and len(self._sheets) <= MOST_FIGURES
        if self._draws:
            self._figures.append(drawn(examination))

    def render(self) -> str:
        """Give the page as text.

        Raises
        ------
        InputError
            When there is nothing to show, or more than 5 MB of it.
        """
        if not self._sheets:
            raise InputError("no spectrum could be answered, so that there is no page to write")
        fuller = [self._figures] if self._draws and self._figures else []
        for figures, lean in (*((f, False) for f in fuller), ([], False), ([], True)):
            page = self._assembled(figures, lean=lean)
            if _size(page) <= MOST_BYTES:
                return page
        raise self._too_large(_size(page))

    def _too_large(self, size: int) -> InputError:
        """Say how many spectra would have room."""
        from .plot import library

        count = len(self._sheets)
        fixed = _size(library()) + (len(base64.b64encode(self._image.data)) if self._image else 0)
        fit = int(0.97 * count * (MOST_BYTES - fixed) / max(size - fixed, 1))
        return InputError(
            f"the page of {count} spectra would have {size / 1e6:.1f} MB, and 5 MB is the most",
            remedy=f"make pages of about {max(fit, 1)} spectra" + (", or take a smaller image" if self._image else ""),
        )

    def write(self, path: str | Path) -> None:
        """Write the page; what was there is replaced. Errors as of `render`, and when it cannot be written."""
        page = self.render()
        try:
            Path(path).write_text(page, encoding="utf-8", newline="\n")
        except OSError as failed:
            raise InputError(
                f"the page could not be written ({failed.strerror or failed})",
                source=str(path),
                remedy="give --page a file in a folder that can be written to",
            ) from None

    def _assembled(self, figures: Sequence[bytes], *, lean: bool) -> str:
        from .plot import library, plot_item

        scripts = [library(), _script()]
        style = variables() + _resource("page.css")
        data = {"sheets": [s.data for s in self._sheets], "anchors": [s.anchor for s in self._sheets], **shades()}
        return Template(_resource("page.html")).substitute(
            title=text(self._title()),
            policy=text(_policy(scripts)),
            style=style,
            heading=self._heading(),
            content=self._content(figures, lean=lean),
            closing=self._closing(),
            symbols=symbols(),
            marks=key_of_marks(),
            data=group(script_data("plot-item", plot_item()), script_data("curves", data)),
            library=scripts[0],
            script=scripts[1],
        )

    def _title(self) -> str:
        count = len(self._sheets)
        return self._about.report.get("title") or (self._sheets[0].name if count == 1 else f"{count} spectra")

    def _heading(self) -> Markup:
        return group(
            el("h1", self._title()), el("p", f"Elements from Auger electron spectra, by {edition()}", cls="by")
        )

    def _content(self, figures: Sequence[bytes], *, lean: bool) -> Markup:
        sheets, alone = self._sheets, len(self._sheets) == 1
        summary = None
        if not alone:
            summary = matrix([s.answer for s in sheets], [s.anchor for s in sheets], [s.decisions for s in sheets])
        drawings = [*figures, *([None] * (len(sheets) - len(figures)))]
        articles = [
            article(s, drawing, s.lean if lean else s.body, alone=alone)
            for s, drawing in zip(sheets, drawings, strict=True)
        ]
        return group(summary, el("p", LEFT_OUT) if lean else None, self._picture(), *articles)

    def _picture(self) -> Markup | None:
        if self._image is None:
            return None
        spots = self._about.spots
        anchors = [
            next((f"#{s.anchor}" for s in self._sheets if spot.spectrum and self._is_of(spot.spectrum, s)), None)
            for spot in spots
        ]
        return el("section", el("h2", "Image"), image_figure(self._image, spots, anchors), id="image")

    @staticmethod
    def _is_of(told: str, sheet: Sheet) -> bool:
        from .about import names

        return names(told, sheet.answer.spectrum)

    def _closing(self) -> Markup:
        files_told = []
        if self._about.sha256:
            files_told.append((self._about.source, self._about.sha256))
        if self._image is not None:
            files_told.append((self._image.name, self._image.sha256))
        return group(
            el("section", el("h2", "Cautions"), cautions(self._cautions()), id="cautions"),
            el(
                "section",
                el("h2", "This page"),
                whole_list(self._command, files_told, self._inputs, len(self._sheets)),
                el("p", INDICATIVE),
                el("p", STANDARDS),
                id="page",
            ),
        )

    def _cautions(self) -> list[str]:
        """Each caution once; where there are several spectra, with those it is about."""
        told: dict[str, list[str]] = {}
        for sheet in self._sheets:
            for caution in sheet.answer.cautions:
                told.setdefault(caution, []).append(sheet.answer.spectrum)
        if len(self._sheets) == 1:
            return list(told)
        return [f"{caution} ({', '.join(where)})" for caution, where in told.items()]


def _policy(scripts: Sequence[str]) -> str:
    """Content security policy: our two scripts by their hashes, inline style, pictures in the file, no network."""
    hashes = (base64.b64encode(hashlib.sha256(s.encode()).digest()).decode("ascii") for s in scripts)
    allowed = " ".join(f"'sha256-{digest}'" for digest in hashes)
    return (
        f"default-src 'none'; script-src {allowed}; style-src 'unsafe-inline'; img-src data:; "
        "base-uri 'none'; form-action 'none'"
    )


def _script() -> str:
    """Our own script, written in parts that see each other and nothing else."""
    return '"use strict";\n(() => {\n' + "\n".join(_resource(name) for name in SCRIPTS) + "})();\n"


def _resource(name: str) -> str:
    return files(__package__).joinpath(name).read_text(encoding="utf-8")


def _size(page: str) -> int:
    return len(page.encode("utf-8"))
