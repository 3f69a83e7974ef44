"""`ident tables`: list, check and rebuild the open tables."""

from __future__ import annotations

import click

from ..tables import own_tables
from .options import format_option, tables_option
from .say import complain


@click.command("tables", short_help="List, check and rebuild the open tables.")
@click.option("--check", "what", flag_value="check", help="Rebuild the derived tables and compare with those here.")
@click.option("--rebuild", "what", flag_value="rebuild", help="Rebuild the derived tables and write them.")
@tables_option
@format_option
def command(what: str | None, form: str) -> int:
    """List the open tables; check them, or rebuild the derived ones from their inputs.

    Example: ident tables --check

    Example: ident tables --tables my_tables
    """
    if what is not None and own_tables() is not None:
        raise click.UsageError(f"--{what} is about the shipped tables; leave --tables out")
    if what == "check":
        return _check()
    if what == "rebuild":
        return _rebuild()
    return _list(form)


def _check() -> int:
    from ..deriving import check_tables

    try:
        differences = check_tables()
    except ModuleNotFoundError as missing:
        return _wanting(missing)
    for difference in differences:
        complain(difference)
    if not differences:
        click.echo("the tables are what their inputs give")
    return 1 if differences else 0


def _rebuild() -> int:
    from ..deriving import rebuild_tables

    try:
        rebuild_tables()
    except ModuleNotFoundError as missing:
        return _wanting(missing)
    click.echo("the derived tables are rebuilt")
    return 0


def _wanting(missing: ModuleNotFoundError) -> int:
    complain(
        f"the derived tables cannot be worked out without {missing.name}; "
        "install what rebuilding needs: pip install 'auger-ident[tables]', or '.[tables]' in a checkout"
    )
    return 1


def _list(form: str) -> int:
    from .. import tables

    files, edition = tables.list_tables(), tables.edition()
    if form == "json":
        from ..report.json_lines import render_json

        rows = [{"file": file.name, "rows": file.rows, "bytes": file.size_bytes} for file in files]
        click.echo(render_json({"edition": edition, "tables": rows}), nl=False)
    elif form == "csv":
        from ..report.csv_rows import render_rows

        click.echo(render_rows([("file", "rows", "bytes"), *((f.name, f.rows, f.size_bytes) for f in files)]), nl=False)
    else:
        from ..report.text_lookup import render_table_list

        click.echo(render_table_list(files, edition), nl=False)
    return 0
