"""`ident scale`: the energy axis, from spectra of reference metals."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import click

from .options import RECORDED, format_option, tables_option, with_options
from .say import on_terminal, warn

if TYPE_CHECKING:
    from ..minima import Analysis
    from ..scale import ScaleCalibration


def _metals(_: click.Context, __: click.Parameter, value: tuple[str, ...]) -> tuple[tuple[str, str], ...]:
    """Read NAME=FILE, several times."""
    pairs = tuple(text.partition("=")[::2] for text in value)
    for (name, path), text in zip(pairs, value, strict=True):
        if not name.strip() or not path:
            raise click.BadParameter(f"{text!r} is no metal with its file; write it as Cu=copper.csv")
    if sum(path == "-" for _, path in pairs) > 1:
        raise click.BadParameter("standard input can be the spectrum of one metal only")
    return tuple((name.strip(), path) for name, path in pairs)


@click.command("scale", short_help="Calibrate the energy axis with reference metals.")
@click.option(
    "--metal", "metals", multiple=True, required=True, callback=_metals, metavar="NAME=FILE",
    help="A spectrum of clean Cu, Al, Ag or Au; once for each metal or range.",
)  # fmt: skip
@click.option("--save", metavar="FILE", help="Write the calibration, for --scale of the other commands.")
@format_option
@with_options(RECORDED)
@tables_option
def command(metals: tuple[tuple[str, str], ...], save: str | None, form: str, **given: Any) -> int:
    """Fit offset and slope of the energy axis to spectra of clean reference metals, recorded as the others will be.

    Says how far off the axis reads, whether it keeps to 3 eV over the range of these spectra, and which line
    decides. Metals far apart in energy give the slope: copper and gold, or silver and aluminium. --save writes a file
    that every command which reads spectra takes by --scale; there, a drift of 0.5 eV and 0.02 % is allowed for.

    Example: ident scale --metal Cu=copper.csv --metal Au=gold.csv --save scale.json
    """
    from ..scale import calibrate, save_scale

    found = calibrate(_analyses(metals, given))
    if save is not None:
        save_scale(found, save)
    click.echo(_rendered(found, form), nl=False)
    if not given["quiet"] and not on_terminal():
        for note in found.notes:
            warn(note)
    return 0


def _analyses(metals: tuple[tuple[str, str], ...], given: dict[str, Any]) -> dict[str, list[Analysis]]:
    """Read the spectra and find their minima; metals are checked before any file is read."""
    from ..identification import relative_resolution
    from ..matching.settings import Settings
    from ..minima import analyse
    from ..scale import reference_metal
    from .inputs import Reading

    unit, number = given["resolution"] or (None, None)
    settings = Settings(
        resolution=number if unit == "relative" else None, resolution_ev=number if unit == "ev" else None
    )
    reading = Reading(**{key: given[key] for key in ("kind", "ordinate", "column", "separate", "within", "quiet")})
    named = [(reference_metal(name), path) for name, path in metals]
    analyses: dict[str, list[Analysis]] = {}
    for metal, path in named:
        for spectrum in reading.spectra_of(path):
            resolution, _ = relative_resolution(spectrum, settings)
            analyses.setdefault(metal, []).append(analyse(spectrum, resolution=resolution))
    return analyses


def _rendered(found: ScaleCalibration, form: str) -> str:
    if form == "json":
        from ..identification import plain_data
        from ..report.json_lines import render_json

        return render_json(plain_data(found))
    if form == "csv":
        from ..report.csv_rows import render_rows
        from ..report.text_scale import SCALE_COLUMNS, scale_rows

        return render_rows([SCALE_COLUMNS, *scale_rows(found)])
    from ..report.text_scale import render_scale

    return render_scale(found)
