"""One spectrum on one sheet: differential panel above, direct panel under it, assignments to the right."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import TYPE_CHECKING

from ..errors import InputError, SettingError
from .escape import printable
from .figure_text import FONT, write_within
from .palette import FAINT_INK, INK, PAPER

if TYPE_CHECKING:
    from matplotlib.figure import Figure

    from ..identification import Examination, Identification

FORMATS = ("png", "svg", "pdf")
SHEET_INCHES = (11.69, 8.27)  # A4 on its side (ISO 216)
DOTS_PER_INCH = 200
LEFT, RIGHT, LIST_LEFT, LIST_RIGHT = 0.05, 0.70, 0.722, 0.985
TOP, MIDDLE, UNDER, BOTTOM = 0.905, 0.365, 0.33, 0.075


def figure_format(path: str | Path) -> str:
    """Give the format that a file's name asks for; SettingError when it is none that can be written."""
    found = Path(path).suffix.lower().lstrip(".")
    if found not in FORMATS:
        raise SettingError(f"{printable(str(path))}: a figure is written as png, svg or pdf; end the name in .png")
    return found


def write_figure(examination: Examination, path: str | Path) -> None:
    """Draw an answer and save it.

    Parameters
    ----------
    examination : Examination
        What `ident.identification.examine` gave: the answer, and the curve it is about.
    path : str or Path
        Ends in .png, .svg or .pdf; what was there is replaced.

    Raises
    ------
    SettingError
        When the name ends in something else.
    InputError
        When the file cannot be written.
    """
    with style():
        save(make_figure(examination), path)


def save(figure: Figure, path: str | Path) -> None:
    """Write a figure that was drawn; errors are those of `write_figure`."""
    form = figure_format(path)
    # nothing about when or where, so that the same answer gives the same file
    undated = {"png": {"Software": None}, "svg": {"Date": None}, "pdf": {"CreationDate": None}}[form]
    try:
        figure.savefig(path, format=form, dpi=DOTS_PER_INCH, metadata=undated)
    except OSError as failed:
        raise InputError(
            f"the figure could not be written ({failed.strerror or failed})",
            source=str(path),
            remedy="give --figure a file in a folder that can be written to",
        ) from None


def make_figure(examination: Examination) -> Figure:
    """Draw an answer, without saving it."""
    with style():
        return _drawn(examination)


@contextmanager
def style() -> Iterator[None]:
    """Settings of ours for the while, whatever the user's own are."""
    import matplotlib as mpl

    with mpl.rc_context():
        mpl.rcdefaults()
        mpl.rcParams.update(
            {
                "font.family": [FONT],
                "svg.fonttype": "none",  # text stays text
                "svg.hashsalt": "ident",
                "pdf.fonttype": 42,
                "hatch.linewidth": 0.4,
                "axes.edgecolor": INK,
                "axes.linewidth": 0.7,
                "axes.unicode_minus": True,
            }
        )
        yield


def _drawn(examination: Examination) -> Figure:
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    from ..identification.predicted import predict_curves
    from .figure_labels import labels_of
    from .figure_list import draw_list
    from .figure_panels import ENERGY_AXIS, draw_differential, draw_direct

    answer = examination.answer
    figure = Figure(figsize=SHEET_INCHES, dpi=100, facecolor=PAPER)
    FigureCanvasAgg(figure)
    labels = labels_of(answer)
    alone = answer.kind == "derivative"
    floor = BOTTOM if alone else MIDDLE
    upper = figure.add_axes((LEFT, floor, RIGHT - LEFT, TOP - floor), gid="differential")
    left_out = draw_differential(upper, examination, labels, predict_curves(examination, answer.called))
    if alone:
        upper.set_xlabel(f"{ENERGY_AXIS}; recorded as a derivative, so that there is no direct panel", fontsize=8)
    else:
        lower = figure.add_axes((LEFT, BOTTOM, RIGHT - LEFT, UNDER - BOTTOM), gid="direct")
        draw_direct(lower, examination, labels)
        upper.tick_params(labelbottom=False)
    column = figure.add_axes((LIST_LEFT, BOTTOM, LIST_RIGHT - LIST_LEFT, TOP - BOTTOM), gid="assignments")
    draw_list(column, answer, labels, left_out)
    _head_and_foot(figure, answer)
    return figure


def _head_and_foot(figure: Figure, answer: Identification) -> None:
    sample = answer.header.get("sample")
    title = str(sample) if sample else answer.spectrum
    ranges = ", ".join(f"{low:.0f} to {high:.0f} eV" for low, high in answer.ranges_ev)
    what = f"{answer.spectrum}: {answer.kind} spectrum, {ranges}, {answer.minima} minima above the noise"
    beam = answer.settings.get("beam_kev")
    what += f", {beam:g} keV beam" if beam else ""
    write_within(figure, LEFT, LIST_RIGHT, 0.958, title, fontsize=12, weight="bold", color=INK)
    write_within(figure, LEFT, LIST_RIGHT, 0.932, what, fontsize=8, color=FAINT_INK)
    sha = f"; input SHA-256 {answer.sha256[:16]}…" if answer.sha256 else ""
    foot = f"made by {answer.edition}{sha}; at% are indicative; Auger data alone do not give oxidation states reliably"
    write_within(figure, LEFT, LIST_RIGHT, 0.018, foot, fontsize=6.5, color=FAINT_INK)
