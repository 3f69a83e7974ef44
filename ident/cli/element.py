"""`ident element`: the reference card of an element."""

from __future__ import annotations

from typing import Any

import click

from ..errors import UnknownNameError
from ..lookup import ElementCard, card_answer, element_card
from .options import STATING, energy_scale, format_option, tables_option, with_options
from .say import complain, say_corrected, say_own_tables


@click.command("element", short_help="The reference card of an element.")
@click.argument("names", nargs=-1, required=True, metavar="NAME...")
@with_options(STATING)
@click.option(
    "--emission",
    type=float,
    default=0.0,
    metavar="DEG",
    help="From the surface normal to where electrons are collected; 42 for a coaxial mirror analyser.",
)
@tables_option
@format_option
def command(names: tuple[str, ...], emission: float, form: str, **given: Any) -> int:
    """Show the reference card of each element NAME: its lines, their rivals, the line that decides, sources.

    Depths are those that 95 % of a line's signal comes from: three mean free paths.

    NAME is a symbol or a name; small misspellings are forgiven.

    Example: ident element titanium

    Example: ident element --reference vacuum --kind direct Cu
    """
    scale = energy_scale(given)
    cards, failed = [], False
    say_corrected(names)
    for name in names:
        try:
            cards.append(element_card(name, scale=scale, emission_deg=emission))
        except UnknownNameError as unknown:
            complain(str(unknown))
            failed = True
    if cards:
        click.echo(_rendered(cards, form), nl=False)
        say_own_tables(form)
    return 1 if failed else 0


def _rendered(cards: list[ElementCard], form: str) -> str:
    if form == "json":
        from ..report.json_lines import render_json

        return "".join(render_json(card_answer(card)) for card in cards)
    if form == "csv":
        from ..report.csv_rows import ELEMENT_COLUMNS, element_rows, render_rows

        return render_rows([ELEMENT_COLUMNS, *[row for card in cards for row in element_rows(card)]])
    from ..report.text_lookup import render_card

    return "".join(render_card(card) for card in cards)
