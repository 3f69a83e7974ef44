"""`ident at`: what could explain a minimum at an energy."""

from __future__ import annotations

from typing import Any

import click

from ..errors import SettingError
from ..lookup import Candidate, EnergyScale, candidates_at
from .options import STATING, energy_scale, format_option, tables_option, with_options
from .say import complain, say_own_tables


@click.command(
    "at",
    short_help="What could a minimum at this energy be?",
    context_settings={"ignore_unknown_options": True},
)
@click.argument("energies", nargs=-1, required=True, type=float, metavar="ENERGY...")
@click.option("--reach", type=float, metavar="EV", help="Only lines at most this many eV away.")
@with_options(STATING)
@tables_option
@format_option
def command(energies: tuple[float, ...], reach: float | None, form: str, **given: Any) -> int:
    """Name the elements that could explain a minimum at each ENERGY, and what else must then be seen.

    ENERGY is that of the derivative minimum in eV, on the handbook scale, unless options say how else it was read;
    the answer states energies the same way.

    Example: ident at 651

    Example: ident at --reference fermi --kind direct 918.6
    """
    scale = energy_scale(given)
    found, failed = [], False
    for energy in energies:
        try:
            found.append((energy, candidates_at(energy, within=reach, scale=scale)))
        except SettingError as wrong:
            if len(energies) == 1:
                raise
            complain(str(wrong))
            failed = True
    if form == "csv":
        from ..report.csv_rows import AT_COLUMNS, at_rows, render_rows

        rows = [row for energy, candidates in found for row in at_rows(energy, candidates)]
        click.echo(render_rows([AT_COLUMNS, *rows]), nl=False)
        say_own_tables(form)
        return 1 if failed else 0
    for energy, candidates in found:
        click.echo(_rendered(energy, candidates, form, scale), nl=False)
    say_own_tables(form)
    return 1 if failed else 0


def _rendered(energy_ev: float, candidates: tuple[Candidate, ...], form: str, scale: EnergyScale) -> str:
    if form == "json":
        from ..lookup import at_answer
        from ..report.json_lines import render_json

        return render_json(at_answer(energy_ev, candidates, scale=scale))
    from ..report.text_lookup import render_at

    return render_at(energy_ev, candidates, scale)
