"""The program `ident`: arguments, streams and exit codes. Commands are loaded when they are called for."""

from __future__ import annotations

import os
import sys
from importlib import import_module
from typing import Any

import click

from ..errors import IdentError, SettingError, UnknownNameError
from .say import complain

COMMANDS = ("assign", "at", "element", "minima", "recheck", "contrast", "scale", "tables")
WRONG_USAGE, NOT_READ = 2, 1

CONTEXT = {"help_option_names": ["-h", "--help"], "max_content_width": 100}


class LazyGroup(click.Group):
    """A group that imports a command's module only when that command is named."""

    def list_commands(self, ctx: click.Context) -> list[str]:
        """Name the commands in the order of use."""
        return list(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:
        """Load one command."""
        if cmd_name not in COMMANDS:
            return None
        command: click.Command = import_module(f"{__name__}.{cmd_name}").command
        return command


def _show_version(ctx: click.Context, _: click.Parameter, wanted: bool) -> None:
    if wanted and not ctx.resilient_parsing:
        from .. import __version__, tables

        click.echo(f"ident {__version__}, tables {tables.edition()}")
        ctx.exit()


@click.group(cls=LazyGroup, context_settings=CONTEXT)
@click.option(
    "--version",
    is_flag=True,
    is_eager=True,
    expose_value=False,
    callback=_show_version,
    help="Show the edition of program and tables.",
)
def group() -> None:
    """Name the elements on a surface from Auger electron spectra, with probabilities and reasons.

    Exit codes: 0 answered, 1 an input could not be read or used, 2 wrong usage, 3 nothing above the noise.

    Example: ident assign survey.csv
    """


def main(argv: list[str] | None = None) -> None:
    """Run the program and end the process with its exit code."""
    for stream in (sys.stdout, sys.stderr):
        reconfigure: Any = getattr(stream, "reconfigure", None)
        if reconfigure is not None:
            reconfigure(errors="backslashreplace")
    sys.exit(_run(argv))


def _run(argv: list[str] | None) -> int:
    try:
        code = group.main(args=argv, prog_name="ident", standalone_mode=False)
        sys.stdout.flush()
        return code if isinstance(code, int) else 0
    except click.exceptions.Exit as leave:
        return leave.exit_code
    except click.exceptions.NoArgsIsHelpError as help_wanted:
        click.echo(help_wanted.format_message(), err=True)
        return WRONG_USAGE
    except click.UsageError as wrong:
        where = f" (see {wrong.ctx.command_path} --help)" if wrong.ctx else ""
        complain(wrong.format_message().rstrip(".") + where)
        return WRONG_USAGE
    except click.Abort:
        complain("stopped")
        return 130
    except (SettingError, UnknownNameError) as wrong:
        complain(str(wrong))
        return WRONG_USAGE
    except IdentError as failed:
        complain(str(failed))
        return NOT_READ
    except BrokenPipeError:
        # the reader of our output has gone: nothing to say, and nothing more to flush
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return 0
    except OSError as failed:
        complain(f"the answer could not be written: {failed.strerror or failed}; send it elsewhere, or make room")
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return NOT_READ
