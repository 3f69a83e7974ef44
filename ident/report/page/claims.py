"""Who claims each minimum and why: a table, which is what a plot says to those who do not see it."""

from __future__ import annotations

from typing import TYPE_CHECKING

from ..figure_labels import Label
from ..layout import probability
from ..palette import MARKS
from .curves import label_at
from .marks import mark
from .markup import Markup, Part, el

if TYPE_CHECKING:
    from ...identification import ArtefactNote, Assignment, Examination, LineNote, Unexplained
    from ...minima import Minimum

MOST_CLAIMS = 4
CALLED = 0.5  # probability from which an element goes before those that are only possible
MINOR = "no element asked for: weak, or what a strong line leaves beside it"


def minima_table(examination: Examination, labels: tuple[Label, ...], anchor: str) -> Markup:
    """List the minima in order of energy, each with those who claim it and why."""
    answer = examination.answer
    left = {item.energy_ev: _left(item) for item in answer.unexplained}
    nothing = {note.energy_ev: note for note in answer.artefacts}
    head = el(
        "tr",
        *(el("th", word, scope="col") for word in ("minimum, eV", "times noise", "what it is", "claimed by, and why")),
    )  # fmt: skip
    rows = [
        _row(place, minimum, label_at(minimum.energy_ev, labels), answer.assignments, left, nothing, anchor)
        for place, minimum in enumerate(examination.analysis.minima)
    ]
    found = {minimum.energy_ev for minimum in examination.analysis.minima}
    rows += [
        el(
            "tr",
            el("th", f"{note.energy_ev:.1f}", scope="row"),
            el("td"),
            el("td", mark("artefact"), f" {note.kind}"),
            el("td", f"{note.what}: no line"),
        )
        for note in answer.artefacts
        if note.energy_ev not in found
    ]
    if not rows:
        return el("p", "No minimum stands above the noise.")
    caption = el("caption", "Minima on the axis of the spectrum; the button of a minimum shows it in the plot")
    return el("div", el("table", caption, el("thead", head), el("tbody", *rows), cls="minima n1 n2"), cls="wide")


def _row(
    place: int,
    minimum: Minimum,
    label: Label | None,
    assignments: tuple[Assignment, ...],
    left: dict[float, str],
    nothing: dict[float, ArtefactNote],
    anchor: str,
) -> Markup:
    """One minimum; `left` and `nothing` say of energies why they are unexplained, or what they are if no line."""
    button = el("button", f"{minimum.energy_ev:.1f}", type="button", cls="go", data_place=place)
    energy = minimum.energy_ev
    claims = el("td", *_claims(energy, assignments, left.get(energy), nothing.get(energy)), cls="who")
    return el(
        "tr",
        el("th", button, el("span", f" ± {minimum.sigma_ev:.1f}", cls="faint"), scope="row"),
        el("td", f"{minimum.significance:.0f}"),
        el("td", *_what(label, nothing.get(energy)), cls="what"),
        claims,
        id=f"{anchor}-m{place}",
    )


def _what(label: Label | None, nothing: ArtefactNote | None) -> tuple[Part, ...]:
    if label is None:
        return (mark("artefact"), f" {nothing.kind}") if nothing else (el("span", "minor", cls="faint"),)
    if label.role == "unexplained" and not label.text[0].startswith("unexplained"):
        return mark(label.role), " poorly explained"
    return mark(label.role), f" {MARKS[label.role].word}", ", shared" if label.shared else None


def _left(item: Unexplained) -> str:
    return f"lines near it: {', '.join(item.candidates)}" if item.candidates else "no line near it"


def _claims(
    energy_ev: float, assignments: tuple[Assignment, ...], left: str | None, nothing: ArtefactNote | None
) -> tuple[Part, ...]:
    found = [
        (assignment, line)
        for assignment in assignments
        if assignment.verdict != "not supported"
        for line in assignment.lines
        if line.found_ev == energy_ev
    ]
    found.sort(key=lambda pair: (pair[0].probability < CALLED, -(pair[1].share or 0.0) * pair[0].probability))
    parts: list[Part] = []
    if found:
        parts.append(el("ul", *(_claim(*pair) for pair in found[:MOST_CLAIMS])))
        if len(found) > MOST_CLAIMS:
            parts.append(el("p", f"and {len(found) - MOST_CLAIMS} weaker claims"))
        parts.append(_why(found[0][0]))
    if left is not None:
        parts.append(el("p", f"{'explained poorly' if found else 'unexplained'}; {left}"))
    if nothing is not None:
        parts.append(el("p", f"{'or ' if found else ''}{nothing.what}"))
    return tuple(parts) if parts else (el("span", MINOR, cls="faint"),)


def _claim(assignment: Assignment, line: LineNote) -> Markup:
    part = f", {100 * line.share:.0f} % of its depth" if line.share is not None else ""
    return el(
        "li",
        el("b", f"{assignment.element} {line.transition}"),
        f" expected at {line.expected_ev:.1f} ± {line.sigma_ev:.1f}{part}; ",
        f"{assignment.element} is {assignment.verdict}, {probability(assignment.probability)}",
    )


def _why(assignment: Assignment) -> Markup:
    """The weightiest reason for and against whoever claims most of a minimum."""
    told: list[Part] = []
    for side in ("for", "against"):
        reason = next((r for r in assignment.reasons if r.side == side), None)
        if reason is not None:
            told += [
                el("br") if told else None,
                el("span", f"{assignment.element}, {side}: ", cls="faint"),
                reason.text,
            ]
    return el("p", *told, cls="why")
