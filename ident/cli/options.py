"""The options that commands share, and how their words are read."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable
from typing import TYPE_CHECKING, Any, TypeVar

import click

if TYPE_CHECKING:
    from ..physics.scales import EnergyScale
    from ..scale import ScaleCalibration

Function = TypeVar("Function", bound=Callable[..., Any])


def _resolution(_: click.Context, __: click.Parameter, value: str | None) -> tuple[str, float] | None:
    """Read "0.5%" of the energy or "1.2eV" throughout: what it is ("relative" or "ev") and the number."""
    if value is None:
        return None
    found = re.fullmatch(r"\s*(\d+(?:[.,]\d*)?|[.,]\d+)\s*(%|ev)\s*", value, flags=re.IGNORECASE)
    if not found:
        raise click.BadParameter(f"{value!r} is no resolution; write it as 0.5% or 1.2eV")
    number = float(found[1].replace(",", "."))
    return ("relative", number / 100.0) if found[2] == "%" else ("ev", number)


def _range(_: click.Context, __: click.Parameter, value: str | None) -> tuple[float, float] | None:
    """Read "LO:HI" in eV."""
    if value is None:
        return None
    try:
        low, high = (float(part) for part in value.split(":"))
    except ValueError:
        raise click.BadParameter(f"{value!r} is no range; write it as 100:1200, in eV") from None
    if not 0 <= low < high < float("inf"):
        raise click.BadParameter(f"{value!r} does not run from a lower to a higher energy")
    return low, high


def _names(_: click.Context, __: click.Parameter, value: Iterable[str]) -> tuple[str, ...]:
    """Read names given in several options, or with commas or blanks between."""
    from .say import say_corrected

    names = tuple(name for text in value for name in re.split(r"[,;\s]+", text) if name)
    say_corrected(names)
    return names


def _scale(_: click.Context, __: click.Parameter, value: str | None) -> ScaleCalibration | None:
    """Read a scale file, when one is given."""
    if value is None:
        return None
    from ..scale import load_scale

    return load_scale(value)


format_option = click.option(
    "--format",
    "form",
    type=click.Choice(["text", "json", "csv"]),
    default="text",
    show_default=True,
    help="How to answer; json is one object a line.",
)

figure_option = click.option(
    "--figure",
    metavar="PATH",
    help="Draw the answer: a .png, .svg or .pdf, or a folder for one .png a spectrum.",
)

RECORDED = (
    click.option(
        "--kind",
        type=click.Choice(["auto", "direct", "derivative"]),
        default="auto",
        show_default=True,
        help="What was recorded; overrules what the file says.",
    ),
    click.option(
        "--ordinate",
        type=click.Choice(["auto", "n", "en"]),
        default="auto",
        show_default=True,
        help="N(E) or E N(E).",
    ),
    click.option(
        "--column", metavar="NAME", help='Which ordinate of several: its name, its number, or "sum" of all sweeps.'
    ),
    click.option("--separate", is_flag=True, help="Take blocks and windows of a file for spectra of their own."),
    click.option("--within", callback=_range, metavar="LO:HI", help="Use this range of the energies only, in eV."),
    click.option("--resolution", callback=_resolution, metavar="0.5%|1.2eV", help="Energy resolution of the analyser."),
    click.option("--quiet", is_flag=True, help="No progress and no warnings on standard error."),
)

scale_option = click.option(
    "--scale", callback=_scale, metavar="FILE", help="Calibration of the axis, from ident scale --save."
)

READING = (*RECORDED, scale_option)


def _own_tables(_: click.Context, __: click.Parameter, value: str | None) -> None:
    """Lay the user's own tables over the shipped ones before anything is read."""
    from ..tables import use_tables

    use_tables(value)


tables_option = click.option(
    "--tables",
    metavar="DIR",
    is_eager=True,
    expose_value=False,
    callback=_own_tables,
    help="Own tables over the shipped ones, row by row: CSV files named and built like them.",
)

KNOWING = (
    click.option("--beam", type=float, metavar="KEV", help="Primary energy in keV, when the file does not say it."),
    click.option("--expect", multiple=True, callback=_names, metavar="NAMES", help="Elements likelier than usual."),
    click.option("--rule-out", multiple=True, callback=_names, metavar="NAMES", help="Elements that cannot be there."),
    click.option("--why-not", multiple=True, callback=_names, metavar="NAMES", help="Say why these are not named."),
    click.option("--sputtered", metavar="GAS", help="What the surface was sputtered with last, such as Ar."),
    click.option("--insulator", is_flag=True, help="The sample may charge: allow the axis tens of eV."),
    click.option("--no-commonness", is_flag=True, help="Take every element for equally common."),
)

STATING = (
    click.option(
        "--reference",
        type=click.Choice(["absolute", "fermi", "vacuum", "handbook"]),
        default="handbook",
        show_default=True,
        help="Level that energies count from; absolute is the Fermi level.",
    ),
    click.option(
        "--kind",
        type=click.Choice(["derivative", "direct"]),
        default="derivative",
        show_default=True,
        help="Minimum of the differentiated line, or maximum of the direct one.",
    ),
    click.option(
        "--resolution", callback=_resolution, metavar="0.5%|1.2eV", help="Energy resolution of the analyser; 0.5 %."
    ),
    click.option("--modulation", type=float, default=0.0, metavar="EV", help="Modulation, peak to peak."),
    click.option("--smoothing", type=float, default=0.0, metavar="EV", help="Window of the smoothing derivative."),
    click.option(
        "--separation",
        type=float,
        metavar="EV",
        help="Between maximum and minimum of the differentiated line: use it when what broadens is not known.",
    ),
    click.option(
        "--work-function", type=float, metavar="EV", help="Of the analyser, for the vacuum level; 4.5 (standard)."
    ),
)


def energy_scale(given: dict[str, Any]) -> EnergyScale:
    """Make the scale of the user's energies from the options of `STATING`."""
    from ..physics.scales import EnergyScale

    unit, number = given["resolution"] or ("relative", None)
    chosen = {name: given[name] for name in ("reference", "kind")}
    broadening = {f"{name}_ev": given[name] for name in ("modulation", "smoothing", "separation")}
    if number is not None:
        broadening |= {"resolution": number} if unit == "relative" else {"resolution": 0.0, "resolution_ev": number}
    if given["work_function"] is not None:
        broadening["work_function_ev"] = given["work_function"]
    return EnergyScale(**chosen, **broadening)


def with_options(options: Iterable[Callable[[Function], Function]]) -> Callable[[Function], Function]:
    """Put options on a command, first one on top."""

    def decorate(function: Function) -> Function:
        for option in reversed(tuple(options)):
            function = option(function)
        return function

    return decorate
