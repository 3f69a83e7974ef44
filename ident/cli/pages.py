"""`--page PATH` and what goes with it. What cannot work is said before any spectrum is read."""

from __future__ import annotations

import os
import shlex
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any, TypeVar

import click

from ..errors import InputError
from ..report.escape import printable

if TYPE_CHECKING:
    from ..identification import Examination
    from ..report.page import About, Image

Function = TypeVar("Function", bound=Callable[..., Any])

ENDINGS = (".html", ".htm")
WORDS = "ident.words"  # where the words of a call are kept
READ_BY = ("kind", "ordinate", "column", "separate", "within")


class WithWords(click.Command):
    """A command that remembers the words it was called with, for a page that says how to make it again."""

    def parse_args(self, ctx: click.Context, args: list[str]) -> list[str]:
        """Keep the words, and read them as ever."""
        ctx.meta[WORDS] = list(args)
        return super().parse_args(ctx, args)


def _pairs(_: click.Context, __: click.Parameter, value: tuple[str, ...]) -> dict[str, str]:
    """Read KEY=VALUE, several times."""
    told = {}
    for text in value:
        key, equals, said = text.partition("=")
        if not equals or not said.strip():
            raise click.BadParameter(f"{text!r} gives no value; write it as operator='A. Analyst'")
        told[key.strip()] = said
    return told


PAGE_OPTIONS = (
    click.option("--page", metavar="PATH", help="Write one self-contained page of all answers, a .html file."),
    click.option("--about", metavar="FILE", help="TOML file with the page's header, the analyst's decisions, spots."),
    click.option(
        "--header", multiple=True, callback=_pairs, metavar="KEY=VALUE", help="An entry of the page's header."
    ),
    click.option("--image", metavar="FILE", help="PNG or JPEG for the page, with the spots of --about marked."),
)  # fmt: skip


class PageFile:
    """The file that a page is written to, once all spectra are answered.

    Parameters
    ----------
    given : mapping
        The options of the call: `page`, `about`, `header` and `image`, and those that say how files are read.
    inputs : sequence of str
        Files as named.
    """

    def __init__(self, given: dict[str, Any], inputs: Sequence[str]) -> None:
        from ..report.page import Page, check_library, check_spectra, check_spots

        self._path = Path(given["page"])
        _check_path(self._path)
        check_library()
        about = _about(given)
        check_spectra(about, inputs)
        image = _image(given["image"])
        if image is not None:
            check_spots(about.spots, image, about.source)
        words = click.get_current_context().meta.get(WORDS, ())
        self._page = Page(
            about=about,
            image=image,
            reading={key: given[key] for key in READ_BY},
            command=f"ident assign {shlex.join(words)}" if words else None,
            inputs=inputs,
        )

    def add(self, examination: Examination) -> None:
        """Add the answer on one spectrum."""
        self._page.add(examination)

    def write(self) -> None:
        """Write the page, if there is anything to show."""
        if len(self._page):
            self._page.write(self._path)


def check_alone(given: dict[str, Any]) -> None:
    """Refuse what is only for a page, where no page is asked for."""
    for name in ("about", "header", "image"):
        if given[name]:
            raise click.UsageError(f"--{name} is for a page; add --page report.html")


def _about(given: dict[str, Any]) -> About:
    from ..report.page import About, read_about, report_value

    about = read_about(given["about"]) if given["about"] else About()
    try:
        return about.with_report({key: report_value(key, value) for key, value in given["header"].items()})
    except InputError as wrong:
        raise click.UsageError(f"--header: {wrong}") from None


def _image(path: str | None) -> Image | None:
    from ..report.page import read_image

    return read_image(path) if path else None


def _check_path(path: Path) -> None:
    shown = printable(str(path))
    if path.suffix.lower() not in ENDINGS:
        raise click.UsageError(f"--page {shown}: a page is a .html file; end the name in .html")
    if path.is_dir():
        raise InputError(f"--page {shown} is a folder; name a file in it")
    if not path.parent.is_dir():
        raise InputError(f"--page {shown}: there is no folder {printable(str(path.parent))}; make it first")
    if not os.access(path if path.exists() else path.parent, os.W_OK):
        raise InputError(f"--page {shown} cannot be written to; name a file in a folder that can")
