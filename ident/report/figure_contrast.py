"""Suspect and clean spectra on one sheet: overlaid above, their difference below, what differs to the right."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np

from ..identification.predicted import background_slope
from ..spectrum import FloatArray
from .figure import BOTTOM, LEFT, LIST_LEFT, LIST_RIGHT, MIDDLE, RIGHT, SHEET_INCHES, TOP, UNDER, save, style
from .figure_text import safe, write_within
from .palette import FAINT_INK, INK, MARKS, PAPER, RULE
from .text_contrast import ratio_told

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

    from ..contrasting import Contrast, Difference
    from ..identification import Examination

ENERGY_AXIS = "kinetic energy, eV, on the scale of the tables (each spectrum's axis corrected)"
DASHES = ((0, ()), (0, (4, 1.5)), (0, (1.2, 1.2)), (0, (6, 1.5, 1.2, 1.5)))  # clean ones, one after the other
LIST_POINTS, LINE_STEP = 7.5, 0.021
LEAST_POINTS_APART = 9.0
COMMON_STEP_EV = 0.5


def write_contrast_figure(answer: Contrast, path: str | Path) -> None:
    """Draw a comparison and save it as .png, .svg or .pdf; errors are those of `figure.write_figure`."""
    with style():
        save(make_contrast_figure(answer), path)


def make_contrast_figure(answer: Contrast) -> Figure:
    """Draw a comparison, without saving it."""
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    with style():
        figure = Figure(figsize=SHEET_INCHES, dpi=100, facecolor=PAPER)
        FigureCanvasAgg(figure)
        upper = figure.add_axes((LEFT, MIDDLE, RIGHT - LEFT, TOP - MIDDLE), gid="overlaid")
        lower = figure.add_axes((LEFT, BOTTOM, RIGHT - LEFT, UNDER - BOTTOM), gid="difference")
        grid, curves = _aligned(answer.examined)
        _overlay(upper, answer, grid, curves)
        _difference(lower, answer, grid, curves)
        _list(figure, answer)
        title = f"{answer.suspect}: suspect against {len(answer.clean)} clean"
        write_within(figure, LEFT, LIST_RIGHT, 0.958, title, fontsize=12, weight="bold", color=INK)
        write_within(figure, LEFT, LIST_RIGHT, 0.932, f"clean: {', '.join(answer.clean)}", fontsize=8, color=FAINT_INK)
        foot = f"made by {answer.edition}; hints are hints: elements alone prove no residue"
        write_within(figure, LEFT, LIST_RIGHT, 0.018, foot, fontsize=6.5, color=FAINT_INK)
        return figure


def _aligned(examined: Sequence[Examination]) -> tuple[FloatArray, list[FloatArray]]:
    """Differential spectra less their backgrounds on one grid, axes corrected, each over its own size; NaN in gaps."""
    low = min(one.analysis.spectrum.ranges_ev[0][0] for one in examined)
    high = max(one.analysis.spectrum.ranges_ev[-1][1] for one in examined)
    grid = np.arange(np.floor(low), np.ceil(high), COMMON_STEP_EV)
    return grid, [_on_grid(one, grid) for one in examined]


def _on_grid(one: Examination, grid: FloatArray) -> FloatArray:
    scale = one.evidence.scale
    curve = np.full(grid.size, np.nan)
    for differential in one.analysis.differentials:
        energy = (differential.energy_ev - scale.offset_ev) / (1.0 + scale.slope)
        inside = (grid >= energy[0]) & (grid <= energy[-1])
        curve[inside] = np.interp(grid[inside], energy, differential.derivative - background_slope(differential))
    shown = curve[np.isfinite(curve) & (grid > 40.0)]
    size = float(np.sqrt(np.mean(np.square(shown)))) if shown.size else 1.0
    return curve / (size or 1.0)


def _overlay(axes: Axes, answer: Contrast, grid: FloatArray, curves: list[FloatArray]) -> None:
    axes.plot(grid, curves[0], color=MARKS["unexplained"].colour, linewidth=1.1, label="suspect", zorder=3)
    for place, curve in enumerate(curves[1:]):
        name = f"clean: {Path(answer.clean[place]).name}" if len(curves) < 6 else ("clean" if place == 0 else None)
        axes.plot(
            grid,
            curve,
            color=MARKS["likely"].colour,
            linewidth=0.8,
            linestyle=DASHES[place % len(DASHES)],
            label=safe(name) if name else None,
        )
    axes.legend(loc="lower right", fontsize=7, frameon=False)
    axes.set_ylabel("differential spectrum, each over its own size", fontsize=8)
    axes.tick_params(labelbottom=False)
    _plain(axes, grid)


def _difference(axes: Axes, answer: Contrast, grid: FloatArray, curves: list[FloatArray]) -> None:
    """Suspect less the mean of the clean ones, with the range of the clean ones about their mean."""
    clean = np.array(curves[1:])
    with np.errstate(invalid="ignore"):
        mean = np.mean(clean, axis=0)
        away = curves[0] - mean
    if len(clean) > 1:
        low, high = np.min(clean, axis=0) - mean, np.max(clean, axis=0) - mean
        axes.fill_between(grid, low, high, color=RULE, linewidth=0.0, label="range of the clean ones")
        axes.legend(loc="lower right", fontsize=7, frameon=False)
    axes.plot(grid, away, color=INK, linewidth=0.8)
    axes.axhline(0.0, color=RULE, linewidth=0.6)
    axes.set_xlabel(ENERGY_AXIS, fontsize=8)
    axes.set_ylabel("suspect less clean", fontsize=8)
    _plain(axes, grid)
    _mark(axes, answer, grid, away)


def _mark(axes: Axes, answer: Contrast, grid: FloatArray, away: FloatArray) -> None:
    """Name what is new or enriched at its strongest compared line, where there is room."""
    from ..patterns import all_patterns

    patterns = all_patterns()
    finite = away[np.isfinite(away)]
    if not finite.size:
        return
    span = float(np.ptp(finite)) or 1.0
    axes.set_ylim(float(finite.min()) - 0.42 * span, float(finite.max()) + 0.08 * span)
    taken: list[float] = []
    width_points = 72.0 * axes.figure.get_figwidth() * axes.get_position().width  # type: ignore[union-attr]
    for one in (*answer.only_on_suspect, *answer.enriched):
        row = patterns.symbols.index(one.element)
        at = float(patterns.energy_ev[row, patterns.transitions[row].index(one.lines[0])])
        place = (at - grid[0]) / (grid[-1] - grid[0]) * width_points
        if any(abs(place - other) < LEAST_POINTS_APART for other in taken):
            continue
        taken.append(place)
        near = np.abs(grid - at) < 12.0
        low = float(np.nanmin(away[near])) if np.any(np.isfinite(away[near])) else 0.0
        text = safe(f"{one.element} {one.lines[0]}")
        axes.annotate(
            text,
            (at, low),
            xytext=(0, -5),
            textcoords="offset points",
            fontsize=6.5,
            rotation=90.0,
            ha="center",
            va="top",
        )


def _plain(axes: Axes, grid: FloatArray) -> None:
    axes.set_xlim(float(grid[0]), float(grid[-1]))
    axes.set_yticks([])
    axes.tick_params(labelsize=7, color=INK, length=3)
    for side in ("top", "right"):
        axes.spines[side].set_visible(False)


def _list(figure: Figure, answer: Contrast) -> None:
    y = TOP - 0.01
    for verdict, members in (
        ("only on suspect", answer.only_on_suspect),
        ("enriched", answer.enriched),
        ("depleted", answer.depleted),
        ("only on clean", answer.only_on_clean),
        ("unchanged", answer.unchanged),
    ):
        if not members:
            continue
        write_within(figure, LIST_LEFT, LIST_RIGHT, y, verdict, fontsize=LIST_POINTS + 0.5, weight="bold", color=INK)
        y -= LINE_STEP
        for one in members:
            write_within(figure, LIST_LEFT + 0.008, LIST_RIGHT, y, _told(one), fontsize=LIST_POINTS, color=INK)
            y -= LINE_STEP
        y -= 0.4 * LINE_STEP
    for hint in answer.hints[:4]:
        write_within(figure, LIST_LEFT, LIST_RIGHT, y, f"hint: {hint.pattern}", fontsize=LIST_POINTS, color=FAINT_INK)
        y -= LINE_STEP


def _told(one: Difference) -> str:
    factor = "" if one.ratio_factor is None else f", within a factor {one.ratio_factor:.2g}"
    return f"{one.element}: {ratio_told(one)} times{factor} ({', '.join(one.lines)})"
