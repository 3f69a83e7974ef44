"""`ident contrast`: what the suspect spot has that the clean ones do not."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import click

from ..errors import InputError
from .options import KNOWING, READING, format_option, tables_option, with_options
from .say import complain, on_terminal, warn

if TYPE_CHECKING:
    from ..contrasting import Contrast
    from ..spectrum import Spectrum
    from .inputs import Reading

ENDINGS = (".png", ".svg", ".pdf")


@click.command("contrast", short_help="What does the suspect spot have that clean ones do not?")
@click.argument("suspect", metavar="SUSPECT")
@click.argument("clean", nargs=-1, required=True, metavar="CLEAN...")
@format_option
@click.option("--relative-to", metavar="ELEMENT", help="Ratios relative to this element instead of all that was found.")
@click.option("--figure", metavar="PATH", help="Draw spectra and difference: a .png, .svg or .pdf.")
@with_options(READING)
@with_options(KNOWING)
@tables_option
def command(
    suspect: str, clean: tuple[str, ...], form: str, relative_to: str | None, figure: str | None, **given: Any
) -> int:
    """Compare a SUSPECT spot with CLEAN ones: elements only on it, enriched, depleted, unchanged.

    Dwell, step, range and charging may differ; each spectrum is matched to the scale of the tables first. Several
    clean spectra tell how much good spots differ among themselves. Hints name residues whose elements would fit;
    elements alone cannot prove one.

    Example: ident contrast lifted_pad.csv good_pad_1.csv good_pad_2.csv
    """
    from ..contrasting import contrast
    from .assign import settings_of
    from .inputs import Reading

    if figure is not None and not figure.lower().endswith(ENDINGS):
        raise click.UsageError(f"--figure {figure}: a figure is written as png, svg or pdf; end the name in .png")
    reading = Reading(**{key: given[key] for key in ("kind", "ordinate", "column", "separate", "within", "quiet")})
    spot = _one(suspect, reading)
    good, failed = _several(clean, reading)
    if not good:
        return 1
    found = contrast(spot, good, settings_of(given), relative_to=relative_to)
    click.echo(_rendered(found, form), nl=False)
    if figure is not None:
        from ..report.figure_contrast import write_contrast_figure

        write_contrast_figure(found, figure)
    if not given["quiet"] and not on_terminal():
        for text in found.warnings:
            warn(text)
    if failed:
        return 1
    return 0 if any(one.answer.minima for one in found.examined) else 3


def _one(path: str, reading: Reading) -> Spectrum:
    spectra = reading.spectra_of(path)
    if len(spectra) > 1:
        raise InputError(
            f"holds {len(spectra)} spectra, and the suspect spot is one", source=path, remedy="give a file with one"
        )
    return spectra[0]


def _several(paths: tuple[str, ...], reading: Reading) -> tuple[list[Spectrum], bool]:
    """Read the clean spectra; one that cannot be read does not stop the rest."""
    spectra: list[Spectrum] = []
    failed = False
    for path in paths:
        try:
            spectra.extend(reading.spectra_of(path))
        except InputError as bad:
            complain(str(bad))
            failed = True
    return spectra, failed


def _rendered(found: Contrast, form: str) -> str:
    if form == "json":
        from ..report.json_lines import render_json

        return render_json(found.to_dict())
    from ..report.text_contrast import CONTRAST_COLUMNS, contrast_rows, render_contrast

    if form == "csv":
        from ..report.csv_rows import render_rows

        return render_rows([CONTRAST_COLUMNS, *contrast_rows(found)])
    return render_contrast(found)
