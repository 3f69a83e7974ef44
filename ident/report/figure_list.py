"""The column beside the panels: which elements, how sure, what the marks mean, what is in doubt."""

from __future__ import annotations

import textwrap
from collections.abc import Iterator, Sequence
from typing import TYPE_CHECKING, Any

from .figure_labels import Label
from .figure_panels import SMALL_POINTS, TEXT_POINTS, marker
from .figure_text import safe
from .layout import percent, probability
from .palette import FAINT_INK, INK, MARKS, PREDICTED, RULE
from .text_assign import deciding

if TYPE_CHECKING:
    from matplotlib.axes import Axes

    from ..identification import Assignment, Identification

LINE = 0.0205  # part of the column's height
WIDTH = 50  # characters of small writing
MOST_DOUBTFUL, MOST_ENERGIES = 8, 8
COLUMNS = (0.035, 0.09, 0.26, 0.71, 0.99)  # mark, element, verdict, ends of probability and of atomic per cent


def draw_list(axes: Axes, answer: Identification, labels: Sequence[Label], left_out: Sequence[Label]) -> None:
    """Write the assignments from the top and what is in doubt under them."""
    axes.set_axis_off()
    axes.set_xlim(0.0, 1.0)
    axes.set_ylim(0.0, 1.0)
    y = _assignments(axes, answer, 1.0 - 0.5 * LINE)
    y = _legend(axes, labels, answer, y - 0.8 * LINE)
    _notes(axes, answer, left_out, y - 0.6 * LINE)


def _write(axes: Axes, x: float, y: float, text: str, **style: Any) -> None:
    chosen: dict[str, Any] = {"fontsize": TEXT_POINTS, "color": INK, "va": "center", "parse_math": False, **style}
    axes.text(x, y, safe(text), **chosen)


def _assignments(axes: Axes, answer: Identification, y: float) -> float:
    shown = [a for a in answer.assignments if a.verdict != "not supported"]
    named = [a for a in shown if a.verdict in ("present", "likely")]
    doubtful = [a for a in shown if a.verdict == "possible"]
    if not shown:
        said = "No element is supported by these minima." if answer.minima else "Nothing stands above the noise."
        _write(axes, 0.0, y, said)
        return y - LINE
    heads = ("element", ""), ("verdict", ""), ("probability", "right"), ("at% approx.", "right")
    for x, (text, side) in zip(COLUMNS[1:], heads, strict=True):
        _write(axes, x, y, text, ha=side or "left", fontsize=SMALL_POINTS, color=FAINT_INK)
    y -= 0.55 * LINE
    axes.plot([0.0, 1.0], [y, y], color=RULE, linewidth=0.6)
    for assignment in [*named, *doubtful[:MOST_DOUBTFUL]]:
        y -= LINE
        _row(axes, assignment, y)
        if assignment in named:
            y -= 0.8 * LINE
            _write(axes, COLUMNS[1], y, deciding(assignment), fontsize=0.92 * SMALL_POINTS, color=FAINT_INK)
            y -= 0.2 * LINE
    if len(doubtful) > MOST_DOUBTFUL:
        y -= LINE
        _write(axes, COLUMNS[1], y, f"and {len(doubtful) - MOST_DOUBTFUL} more that are possible", color=FAINT_INK)
    return y - LINE


def _row(axes: Axes, assignment: Assignment, y: float) -> None:
    role = assignment.verdict
    if role == "not supported":
        return
    axes.plot([COLUMNS[0]], [y], **marker(MARKS[role]))
    sure = role in ("present", "likely")
    colour, weight = (INK, "bold") if sure else (FAINT_INK, "normal")
    _write(axes, COLUMNS[1], y, assignment.element, weight=weight, color=colour)
    _write(axes, COLUMNS[2], y, MARKS[role].word, color=colour)
    _write(axes, COLUMNS[3], y, probability(assignment.probability), ha="right", color=colour)
    if sure and assignment.abundance:
        _write(axes, COLUMNS[4], y, percent(assignment.abundance.atomic_percent), ha="right", color=colour)


def _legend(axes: Axes, labels: Sequence[Label], answer: Identification, y: float) -> float:
    """Explain the marks that occur and are not in the table already."""
    roles = {label.role for label in labels}
    rows: list[tuple[dict[str, Any], str]] = []
    if any(label.shared for label in labels):
        rows.append((marker(MARKS["present"], shared=True), "half filled: shared minimum, names joined by +"))
    if "unexplained" in roles:
        rows.append((marker(MARKS["unexplained"]), "unexplained, or poorly by what is named"))
    if "artefact" in roles:
        rows.append((marker(MARKS["artefact"]), "artefact, no line"))
    if any(a.verdict in ("present", "likely") for a in answer.assignments):
        dashed = {"color": PREDICTED, "linestyle": (0, (3.2, 1.4)), "linewidth": 1.1}
        rows.append((dashed, "predicted from the present and likely elements"))
    for style, text in rows:
        xs = [COLUMNS[0]] if "marker" in style else [0.005, 0.065]
        axes.plot(xs, [y] * len(xs), **style)
        _write(axes, COLUMNS[1], y, text, fontsize=SMALL_POINTS)
        y -= LINE
    return y


def _notes(axes: Axes, answer: Identification, left_out: Sequence[Label], y: float) -> None:
    for head, text in _doubts(answer, left_out):
        lines = textwrap.wrap(safe(text), WIDTH)
        if y - LINE * (len(lines) + 1) < 0.0:
            _write(axes, 0.0, max(y, 0.0), "more in the text answer", fontsize=SMALL_POINTS, color=FAINT_INK)
            return
        _write(axes, 0.0, y, head, fontsize=SMALL_POINTS, color=FAINT_INK)
        for line in lines:
            y -= 0.86 * LINE
            _write(axes, 0.0, y, line, fontsize=SMALL_POINTS)
        y -= 1.25 * LINE


def _doubts(answer: Identification, left_out: Sequence[Label]) -> Iterator[tuple[str, str]]:
    if left_out:
        energies = ", ".join(f"{label.energy_ev:.0f}" for label in left_out)
        yield "no room to label", f"{energies} eV"
    for pair in answer.inseparable:
        yield "cannot tell", f"{' or '.join(pair.elements)} at {pair.at_ev:.0f} eV; {pair.settle}"
    claimed = {line.found_ev for a in answer.assignments if a.verdict in ("present", "likely") for line in a.lines}
    yield from _left([u.energy_ev for u in answer.unexplained if u.energy_ev not in claimed], "unexplained")
    yield from _left([u.energy_ev for u in answer.unexplained if u.energy_ev in claimed], "poorly explained")
    if answer.artefacts:
        yield "artefacts", "; ".join(f"{note.energy_ev:.1f} eV, {note.what}" for note in answer.artefacts)
    scale = answer.scale
    yield "axis", f"offset {scale.offset_ev:+.1f} ± {scale.offset_sigma_ev:.1f} eV; charging: {scale.charging}"


def _left(energies_ev: Sequence[float], head: str) -> Iterator[tuple[str, str]]:
    """The most significant of the minima left over."""
    if energies_ev:
        more = len(energies_ev) - MOST_ENERGIES
        shown = ", ".join(f"{energy:.0f}" for energy in energies_ev[:MOST_ENERGIES])
        yield head, f"{shown} eV" + (f" and {more} weaker" if more > 0 else "")
