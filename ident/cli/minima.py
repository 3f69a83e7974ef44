"""`ident minima`: the derivative minima, before any element is named."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

import click

from .options import READING, format_option, with_options

if TYPE_CHECKING:
    from ..minima import Analysis
    from ..scale import ScaleCalibration
    from ..spectrum import Spectrum


@click.command("minima", short_help="The derivative minima, before any element is named.")
@click.argument("spectra", nargs=-1, required=True, metavar="SPECTRUM...")
@format_option
@with_options(READING)
def command(spectra: tuple[str, ...], form: str, **given: Any) -> int:
    """List the derivative minima of each SPECTRUM, before any element is named.

    Energies stay on the spectrum's own axis; with --scale, energies on the calibrated one stand beside them.

    Example: ident minima --within 100:700 survey.csv
    """
    from ..identification import relative_resolution
    from ..matching.settings import Settings
    from ..minima import analyse
    from .inputs import Reading, answer_each

    unit, number = given["resolution"] or (None, None)
    settings = Settings(
        resolution=number if unit == "relative" else None, resolution_ev=number if unit == "ev" else None
    )
    reading = Reading(**{key: given[key] for key in ("kind", "ordinate", "column", "separate", "within", "quiet")})
    if form == "csv":
        from ..report.csv_rows import CORRECTED_COLUMNS, MINIMA_COLUMNS, render_rows

        more = CORRECTED_COLUMNS if given["scale"] is not None else ()
        click.echo(render_rows([(*MINIMA_COLUMNS, *more)]), nl=False)

    def answer(spectrum: Spectrum) -> tuple[bool, Sequence[str]]:
        resolution, notes = relative_resolution(spectrum, settings)
        found = analyse(spectrum, resolution=resolution)
        click.echo(_rendered(found, form, given["scale"]), nl=False)
        return bool(found.minima), (*found.warnings, *notes)

    return answer_each(spectra, reading, answer)


def _rendered(found: Analysis, form: str, scale: ScaleCalibration | None) -> str:
    if form == "json":
        from ..identification import minima_answer
        from ..report.json_lines import render_json

        return render_json(minima_answer(found, scale))
    if form == "csv":
        from ..report.csv_rows import minima_rows, render_rows

        return render_rows(minima_rows(found, scale))
    from ..report.text_lookup import render_minima

    return render_minima(found, scale)
