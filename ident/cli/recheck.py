"""`ident recheck`: a second opinion on somebody else's labels."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

import click

from .options import KNOWING, READING, format_option, tables_option, with_options

if TYPE_CHECKING:
    from ..rechecking import Recheck
    from ..spectrum import Spectrum


@click.command("recheck", short_help="Are somebody else's labels right?")
@click.argument("spectrum", metavar="SPECTRUM")
@click.argument("labels", metavar="LABELS")
@format_option
@with_options(READING)
@with_options(KNOWING)
@tables_option
def command(spectrum: str, labels: str, form: str, **given: Any) -> int:
    """Give a second opinion on the LABELS that somebody, or some program, put on the minima of SPECTRUM.

    LABELS is CSV or plain text: an energy and a label per line, columns in any order and of any name, or a bare list
    of elements. The labels never influence the opinion. One of the two may be -, standard input.

    Example: ident recheck survey.csv labels.csv
    """
    from ..rechecking import read_labels, recheck
    from .assign import settings_of
    from .inputs import Reading, answer_each

    if spectrum == labels == "-":
        raise click.UsageError("standard input is either the spectrum or the labels, not both")
    settings = settings_of(given)
    reading = Reading(**{key: given[key] for key in ("kind", "ordinate", "column", "separate", "within", "quiet")})
    listed = read_labels(labels)
    if form == "csv":
        _write_head()

    def answer(one: Spectrum) -> tuple[bool, Sequence[str]]:
        found = recheck(one, listed, settings)
        click.echo(_rendered(found, form), nl=False)
        return found.opinion.minima > 0, found.warnings

    return answer_each([spectrum], reading, answer)


def _write_head() -> None:
    from ..report.csv_rows import render_rows
    from ..report.text_recheck import RECHECK_COLUMNS

    click.echo(render_rows([RECHECK_COLUMNS]), nl=False)


def _rendered(found: Recheck, form: str) -> str:
    if form == "json":
        from ..report.json_lines import render_json

        return render_json(found.to_dict())
    if form == "csv":
        from ..report.csv_rows import render_rows
        from ..report.text_recheck import recheck_rows

        return render_rows(recheck_rows(found))
    from ..report.text_recheck import render_recheck

    return render_recheck(found)
