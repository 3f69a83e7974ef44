"""What goes to standard error: one line each, escaped."""

from __future__ import annotations

import sys
from collections.abc import Iterable

import click

from ..report.escape import printable


def complain(text: str) -> None:
    """Say an error on one line."""
    click.echo(f"ident: {printable(' '.join(text.split()))}", err=True)


def warn(text: str) -> None:
    """Say a warning on one line."""
    complain(f"warning: {text}")


def on_terminal() -> bool:
    """Tell whether a person watches both streams, and so has the warnings before his eyes already."""
    return sys.stdout.isatty() and sys.stderr.isatty()


def say_own_tables(form: str) -> None:
    """Say that own tables lie over the shipped ones, where the answer itself has no place for it."""
    from .. import tables

    if tables.own_tables() is None or form == "json":
        return
    if form == "text":
        from ..report.layout import hanging

        click.echo(hanging("tables", tables.edition()))
    else:
        warn(f"tables {tables.edition()}")


def say_corrected(names: Iterable[str]) -> None:
    """Say how misspelt names of elements were read."""
    from ..errors import UnknownNameError
    from ..names import name_of, read_element

    for name in names:
        try:
            read = read_element(name)
        except UnknownNameError:
            continue  # said when it is used
        if read.corrected:
            warn(f"'{name}' is read as {name_of(read.symbol)} ({read.symbol})")
