"""The two panels of a figure: the differential spectrum with its labels, and the direct one under it."""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import pairwise
from typing import TYPE_CHECKING, Any

import numpy as np

from ..identification.predicted import background_slope
from ..spectrum import FloatArray
from .figure_axis import Stretch, merged, stretches_of, ticks_of, transforms
from .figure_labels import Label, fitting, interleaved, spread
from .figure_text import safe
from .palette import FAINT_INK, GAP, INK, MARKS, PAPER, PREDICTED, RULE, Mark

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.text import Text

    from ..identification import Examination

ENERGY_AXIS = "kinetic energy, eV, on the spectrum's own axis"
LABEL_POINTS, SMALL_POINTS, TEXT_POINTS = 7.0, 7.0, 8.0
SHAPES = {"disc": "o", "diamond": "D", "ring": "o", "cross": "X", "square": "s"}
SIZES = {"disc": 5.0, "diamond": 4.6, "ring": 5.0, "cross": 6.0, "square": 5.0}  # points
# points: below the curve, between labels, for slanting leaders, above the curve
CLEAR, BETWEEN, FAN, HEADROOM = 10.5, 2.0, 12.0, 16.0
PREDICTED_ABOVE = 0.2  # part of what is measured that predicted lobes may stand above it
RAISED = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")
STEEP = 4.0  # highest over lowest ordinate from which the direct panel is logarithmic


def marker(mark: Mark, *, shared: bool = False) -> dict[str, Any]:
    """Say to matplotlib how a mark is drawn; half filled where a minimum is shared."""
    hollow = mark.shape in ("ring", "square")
    return {
        "marker": SHAPES[mark.shape],
        "markersize": SIZES[mark.shape],
        "color": mark.colour,
        "markeredgecolor": mark.colour if mark.shape != "cross" else PAPER,
        "markeredgewidth": 0.4 if mark.shape == "cross" else 1.1,
        "markerfacecolor": PAPER if hollow else mark.colour,
        "markerfacecoloralt": PAPER,
        "fillstyle": "left" if shared and mark.shape != "cross" else "full",
        "linestyle": "none",
    }


def set_energy_axis(axes: Axes, examination: Examination) -> None:
    """Give an axis to the energies: windows to scale, gaps between them short and marked."""
    ranges = examination.analysis.spectrum.ranges_ev
    axes.set_xscale("function", functions=transforms(ranges))
    joined = merged(ranges)
    axes.set_xlim(joined[0][0], joined[-1][1])
    axes.set_xticks(ticks_of(ranges))
    axes.set_xticks([], minor=True)
    axes.tick_params(labelsize=SMALL_POINTS, color=INK, length=3)
    axes.xaxis.set_major_formatter("{x:.0f}")
    for (_, low), (high, _) in pairwise(joined):
        axes.axvspan(low, high, facecolor=GAP, edgecolor=RULE, hatch="////", linewidth=0.0, zorder=0.5)
    for side in ("top", "right"):
        axes.spines[side].set_visible(False)


def draw_direct(axes: Axes, examination: Examination, labels: Sequence[Label]) -> None:
    """Draw the spectrum as recorded, with what is no line marked in it."""
    spectrum = examination.analysis.spectrum
    set_energy_axis(axes, examination)
    first = min((m.energy_ev for m in examination.analysis.minima), default=0.0)
    tops, bottoms = [], []
    for window in spectrum.windows:
        axes.plot(window.energy_ev, window.intensity, color=INK, linewidth=0.7)
        shown = window.intensity[window.energy_ev >= min(first - 12.0, window.energy_ev[-1] - 1.0)]
        tops.append(float(np.max(shown)))
        bottoms.append(float(np.min(shown)))
    low, high = min(bottoms), max(tops)
    steep = low > 0.0 and high > STEEP * low
    power = math.floor(math.log10(low if steep else max(abs(low), abs(high), 1e-300)))
    power = power if abs(power) > 3 else 0
    _set_ordinate(axes, low, high, steep=steep, power=power)
    for label in labels:
        if label.role == "artefact":
            at = _nearest(spectrum.windows, label.energy_ev)
            axes.plot([label.energy_ev], [at], clip_on=True, **marker(MARKS["artefact"]))
    what = {"n": "N(E)", "en": "E·N(E)"}.get(spectrum.ordinate, "as recorded")
    unit = " ".join([f"10{str(power).translate(RAISED)}" if power else "", "counts" if spectrum.counts else ""]).strip()
    what = ", ".join(part for part in (what, unit, "log scale" if steep else "") if part)
    axes.set_ylabel(f"direct: {what}", fontsize=TEXT_POINTS)
    axes.set_xlabel(ENERGY_AXIS, fontsize=TEXT_POINTS)


def _set_ordinate(axes: Axes, low: float, high: float, *, steep: bool, power: int) -> None:
    """Limits and ticks; logarithmic where the ordinate falls steeply."""
    if steep:
        axes.set_yscale("log")
        margin = (high / low) ** 0.06
        axes.set_ylim(low / margin, high * margin)
        decades = range(math.floor(math.log10(low)) - 1, math.ceil(math.log10(high)) + 1)
        digits = (1, 2, 5) if high > 12.0 * low else (1, 1.5, 2, 3, 4, 5, 7)
        ticks = [digit * 10.0**decade for decade in decades for digit in digits]
        axes.set_yticks([tick for tick in ticks if low / margin <= tick <= high * margin])
        axes.set_yticks([], minor=True)
    else:
        span = (high - low) or 1.0
        axes.set_ylim(low - 0.06 * span, high + 0.08 * span)
    axes.yaxis.set_major_formatter(lambda value, _: f"{value / 10.0**power:g}")


def _nearest(windows: Sequence[Any], energy_ev: float) -> float:
    """The ordinate recorded nearest to an energy."""
    window = min(windows, key=lambda w: float(np.min(np.abs(w.energy_ev - energy_ev))))
    return float(window.intensity[int(np.argmin(np.abs(window.energy_ev - energy_ev)))])


def draw_differential(
    axes: Axes, examination: Examination, labels: Sequence[Label], predicted: Sequence[FloatArray]
) -> tuple[Label, ...]:
    """Draw the differential spectrum and its labels; give the labels that had no room."""
    analysis = examination.analysis
    set_energy_axis(axes, examination)
    axes.set_yticks([])
    what = "recorded differential" if analysis.spectrum.kind == "derivative" else "differential"
    axes.set_ylabel(f"{what}, less the background's slope", fontsize=TEXT_POINTS)
    stretches = stretches_of(analysis)
    levelled = [d.derivative - background_slope(d) for d in analysis.differentials]
    curves = [
        _curve(s, analysis.differentials[s.window].energy_ev, levelled[s.window], predicted[s.window])
        for s in stretches
    ]
    for energy, measured, expected in curves:
        axes.plot(energy, measured, color=INK, linewidth=0.7, zorder=3)
        axes.plot(energy, expected, color=PREDICTED, linewidth=1.1, linestyle=(0, (3.2, 1.4)), zorder=2.5)
    texts = [_text(axes, label) for label in labels]
    _set_heights(axes, curves, [m.energy_ev for m in analysis.minima], texts)
    _show_gains(axes, stretches)
    return _place(axes, labels, texts, curves)


def _curve(
    stretch: Stretch, energy_ev: FloatArray, measured: FloatArray, predicted: FloatArray
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Energies, measured and predicted values of one stretch, magnified."""
    inside = (energy_ev >= stretch.low_ev) & (energy_ev <= stretch.high_ev)
    return energy_ev[inside], stretch.gain * measured[inside], stretch.gain * predicted[inside]


def _text(axes: Axes, label: Label) -> Text:
    """Write a label upright, for now anywhere."""
    faint = label.role in ("possible", "artefact")
    return axes.text(
        0.5, 0.5, "\n".join(safe(line) for line in label.text), transform=None, rotation=90, ha="center", va="top",
        linespacing=1.05, multialignment="right", fontsize=LABEL_POINTS, color=FAINT_INK if faint else INK,
        parse_math=False, gid="minimum label", zorder=4,
    )  # fmt: skip


def _points(axes: Axes) -> float:
    """Pixels a point."""
    return float(axes.figure.dpi) / 72.0


def _size(text: Text) -> tuple[float, float]:
    box = text.get_window_extent()
    return box.width, box.height


def _set_heights(
    axes: Axes,
    curves: Sequence[tuple[FloatArray, FloatArray, FloatArray]],
    minima_ev: Sequence[float],
    texts: Sequence[Text],
) -> None:
    """Leave room for the labels under the deepest minimum; what stands above the lines' own lobes is cut off."""
    low, high = _visible(curves, minima_ev)
    point = _points(axes)
    room = max((_size(text)[1] for text in texts), default=0.0) + (CLEAR + FAN + 3.0) * point
    height = axes.get_window_extent().height
    unit = (high - low) / max(height - room - HEADROOM * point, 0.2 * height)
    axes.set_ylim(low - room * unit, high + HEADROOM * point * unit)


def _visible(
    curves: Sequence[tuple[FloatArray, FloatArray, FloatArray]], minima_ev: Sequence[float]
) -> tuple[float, float]:
    """Lowest and highest value that should be seen: of minima and the lobes beside them, and of the flat parts."""
    lows, highs = [], []
    for energy, measured, _ in curves:
        flat = np.percentile(measured, [2.0, 98.0])
        lows.append(float(flat[0]))
        highs.append(float(flat[1]))
        for at in minima_ev:
            near = measured[(energy > at - 14.0) & (energy < at + 4.0)]
            if near.size:
                lows.append(float(np.min(near)))
                highs.append(float(np.max(near)))
    low, high = min(lows, default=-1.0), max(highs, default=1.0)
    lobes = max((float(np.nanmax(c[2])) for c in curves if np.any(np.isfinite(c[2]))), default=high)
    high = min(max(high, lobes), high + PREDICTED_ABOVE * (high - low))
    return (low, high) if high > low else (low - 1.0, high + 1.0)


def _show_gains(axes: Axes, stretches: Sequence[Stretch]) -> None:
    """Say how much each stretch is magnified, where any is."""
    if all(stretch.gain == 1.0 for stretch in stretches):
        return
    for before, stretch in zip((None, *stretches), stretches, strict=False):
        axes.annotate(
            f"× {stretch.gain:.0f}", (stretch.low_ev, 1.0), (3, -2), xycoords=("data", "axes fraction"),
            textcoords="offset points", va="top", fontsize=TEXT_POINTS, color=INK, gid="gain",
        )  # fmt: skip
        if before is not None and before.window == stretch.window:
            axes.axvline(stretch.low_ev, color=RULE, linewidth=0.6, linestyle=(0, (1, 2)), zorder=1)


def _place(
    axes: Axes,
    labels: Sequence[Label],
    texts: Sequence[Text],
    curves: Sequence[tuple[FloatArray, FloatArray, FloatArray]],
) -> tuple[Label, ...]:
    """Set marks, labels and leaders, in pixels; give the labels that had no room."""
    outline, curve = _outline(axes, curves)
    point = _points(axes)
    frame = axes.get_window_extent()
    widths = [_size(text)[0] + BETWEEN * point for text in texts]
    kept = fitting(labels, widths, frame.width)
    for at, text in enumerate(texts):
        text.set_visible(at in kept and bool(labels[at].text))
    written = [at for at in kept if labels[at].text]
    feet = {at: _foot(curve, axes, label) for at, label in enumerate(labels)}
    for at, label in enumerate(labels):
        _mark(axes, feet[at], label)
    hung = [texts[at] for at in written]
    tops = [feet[at] for at in written]
    centres = spread([foot[0] for foot in tops], [widths[at] for at in written], frame.x0, frame.x1)
    extents = [
        (min(foot[0], centre - 0.5 * widths[at]), max(foot[0], centre + 0.5 * widths[at]))
        for at, foot, centre in zip(written, tops, centres, strict=True)
    ]
    for group in interleaved(extents):
        ends = extents[group[0]][0], max(extents[at][1] for at in group)
        marked = [foot for foot in feet.values() if ends[0] - 4.0 * point <= foot[0] <= ends[1] + 4.0 * point]
        lowest = min(foot[1] for foot in marked) + 0.45 * CLEAR * point
        _hang(axes, [(hung[at], tops[at], centres[at]) for at in group], _roof(outline, ends, lowest))
    return tuple(label for at, label in enumerate(labels) if at not in kept)


def _outline(axes: Axes, curves: Sequence[tuple[FloatArray, FloatArray, FloatArray]]) -> tuple[FloatArray, FloatArray]:
    """The lower edge of what is drawn, and the measured curve alone, in pixels (n, 2), cut to the panel."""
    frame = axes.get_window_extent()
    out = []
    for lower in (np.fmin, lambda measured, _: measured):
        points = np.concatenate([np.column_stack([c[0], lower(c[1], c[2])]) for c in curves])
        pixels: FloatArray = axes.transData.transform(points)
        pixels[:, 1] = np.clip(pixels[:, 1], frame.y0, frame.y1)
        out.append(pixels)
    return out[0], out[1]


def _foot(curve: FloatArray, axes: Axes, label: Label) -> tuple[float, float]:
    """Where the mark of a minimum stands: a little under the curve, in pixels."""
    x = float(axes.transData.transform((label.energy_ev, 0.0))[0])
    away = np.abs(curve[:, 0] - x)
    near = away <= max(2.0, 1.01 * float(np.min(away)))
    return x, float(np.min(curve[near, 1])) - 0.45 * CLEAR * _points(axes)


def _mark(axes: Axes, foot: tuple[float, float], label: Label) -> None:
    x, y = axes.transAxes.inverted().transform(foot)
    axes.plot([x], [y], transform=axes.transAxes, zorder=5, gid=f"mark {label.role}",
              **marker(MARKS[label.role], shared=label.shared))  # fmt: skip


def _roof(outline: FloatArray, ends: tuple[float, float], lowest: float) -> float:
    """The lower edge of what is drawn between two ends; at most `lowest`; pixels."""
    under = outline[(outline[:, 0] >= ends[0] - 1.0) & (outline[:, 0] <= ends[1] + 1.0), 1]
    return min(float(np.min(under, initial=np.inf)), lowest)


def _hang(axes: Axes, labels: Sequence[tuple[Text, tuple[float, float], float]], roof: float) -> None:
    """Hang labels (text, foot, centre) at one height, and lead each minimum to its own."""
    point = _points(axes)
    slanting = any(abs(centre - foot[0]) > 1.0 for _, foot, centre in labels)
    elbow = roof - CLEAR * point
    top = elbow - (FAN * point if slanting else 0.0)
    back = axes.transAxes.inverted()
    for text, foot, centre in labels:
        text.set_transform(axes.transAxes)
        text.set_position(tuple(back.transform((centre, top))))
        path = back.transform([(foot[0], foot[1] - 3.0 * point), (foot[0], elbow), (centre, top + 1.0)])
        axes.plot(path[:, 0], path[:, 1], transform=axes.transAxes, color=FAINT_INK, linewidth=0.5, zorder=2,
                  gid="leader")  # fmt: skip
