"""`ident assign`: which elements are here."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

import click

from .options import KNOWING, READING, figure_option, format_option, tables_option, with_options
from .pages import PAGE_OPTIONS, WithWords

if TYPE_CHECKING:
    from ..identification import Identification
    from ..matching.settings import Settings
    from ..spectrum import Spectrum


@click.command("assign", cls=WithWords, short_help="Which elements are here, how sure, and why?")
@click.argument("spectra", nargs=-1, required=True, metavar="SPECTRUM...")
@format_option
@figure_option
@with_options(PAGE_OPTIONS)
@with_options(READING)
@with_options(KNOWING)
@tables_option
@click.option("--together", is_flag=True, help="The spectra are of one sitting: one offset and slope of the axis.")
def command(spectra: tuple[str, ...], form: str, figure: str | None, together: bool, **given: Any) -> int:
    """Name the elements in each SPECTRUM, ranked, with probability and reasons.

    SPECTRUM is a text table (energy and ordinate in columns) or an ISO 14976 file; - reads standard input.

    Example: ident assign --rule-out Co survey.csv

    Example: ident assign --tables my_tables/ survey.csv

    Example: ident assign --page report.html --about report.toml --image spots.png *.csv
    """
    from dataclasses import replace

    from ..identification import examine
    from .figures import Figures
    from .inputs import Reading, answer_each
    from .pages import PageFile, check_alone

    settings = settings_of(given)
    if given["page"] is None:
        check_alone(given)
    page = PageFile(given, spectra) if given["page"] is not None else None
    figures = Figures(figure, len(spectra)) if figure is not None else None
    reading = Reading(
        **{key: given[key] for key in ("kind", "ordinate", "column", "separate", "within", "quiet")},
        one_figure=figures is not None and figures.single,
    )
    if form == "csv":
        _write_head()

    sitting = _Sitting(settings)

    def answer(spectrum: Spectrum) -> tuple[bool, Sequence[str]]:
        examined = examine(spectrum, sitting.of(spectrum))
        found = sitting.warned(examined.answer, spectrum)
        click.echo(_rendered(found, form), nl=False)
        if figures is not None:
            figures.draw(examined)
        if page is not None:
            page.add(replace(examined, answer=found))
        return found.minima > 0, found.warnings

    code = answer_each(spectra, reading, answer, beforehand=sitting.note if together else None)
    if page is not None:
        page.write()
    return code


class _Sitting:
    """The settings of each spectrum, with what the others of the sitting say of its axis."""

    def __init__(self, settings: Settings) -> None:
        self._settings = settings
        self._known: dict[int, Settings] | None = None

    def note(self, spectra: Sequence[Spectrum]) -> None:
        """Look at all spectra of the sitting."""
        from dataclasses import replace

        from ..identification import sittings_of

        found = zip(spectra, sittings_of(spectra, self._settings), strict=True)
        known = {id(spectrum): replace(self._settings, sitting=sitting) for spectrum, sitting in found}
        self._known = known if len(known) > 1 else None

    def of(self, spectrum: Spectrum) -> Settings:
        """Settings for one spectrum."""
        return self._settings if self._known is None else self._known[id(spectrum)]

    def warned(self, found: Identification, spectrum: Spectrum) -> Identification:
        """Add a warning where the others could not help."""
        from ..identification import warned_of_sitting

        return found if self._known is None else warned_of_sitting(found, self.of(spectrum).sitting)


def settings_of(given: dict[str, Any]) -> Settings:
    """Make the settings of an identification from the options of `READING` and `KNOWING`."""
    from ..matching.settings import Settings

    unit, number = given["resolution"] or (None, None)
    return Settings(
        beam_kev=given["beam"],
        insulator=given["insulator"],
        sputtered=given["sputtered"],
        commonness=not given["no_commonness"],
        expect=given["expect"],
        rule_out=given["rule_out"],
        why_not=given["why_not"],
        resolution=number if unit == "relative" else None,
        resolution_ev=number if unit == "ev" else None,
        scale=given["scale"],
    )


def _write_head() -> None:
    from ..report.csv_rows import ASSIGN_COLUMNS, render_rows

    click.echo(render_rows([ASSIGN_COLUMNS]), nl=False)


def _rendered(found: Identification, form: str) -> str:
    if form == "json":
        from ..report.json_lines import render_json

        return render_json(found.to_dict())
    if form == "csv":
        from ..report.csv_rows import assign_rows, render_rows

        return render_rows(assign_rows(found))
    from ..report.text_assign import render_assign

    return render_assign(found)
