"""The answer of `ident assign` in plain text, meant to be read from top to bottom."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

from .escape import printable
from .layout import columns, hanging, heading, percent, probability

if TYPE_CHECKING:
    from ..identification import Assignment, Identification, State, Untestable
    from ..reasons import Reason

MOST_LINES = 3
MOST_REASONS, FEW_REASONS = 6, 2  # of what is called, and of what is only possible
MOST_UNEXPLAINED = 8


def render_assign(answer: Identification) -> str:
    """Write one answer, with an empty line after it."""
    parts = [*_top(answer), "", *_table(answer), *_why(answer)]
    notes = [*_axis(answer), *_doubts(answer), *_not_seen(answer), *_remarks(answer)]
    return printable_lines([*parts, "", *notes]) + "\n\n"


def printable_lines(parts: list[str]) -> str:
    """Join parts; control characters inside a line are shown and not obeyed."""
    return "\n".join(printable(line) for part in parts for line in part.split("\n"))


def _top(answer: Identification) -> list[str]:
    ranges = ", ".join(f"{low:.0f} to {high:.0f} eV" for low, high in answer.ranges_ev)
    what = f"{answer.kind} spectrum, {ranges}, {answer.minima} minima above the noise"
    sample = answer.header.get("sample")
    lines = [heading(_one_line(answer.spectrum)), hanging("", what, width=0)]
    if sample:
        lines.append(hanging("", f"sample: {_one_line(sample)}", width=0))
    return lines


def _one_line(text: str) -> str:
    return printable(text)


def _table(answer: Identification) -> list[str]:
    if not answer.assignments:
        said = "Nothing stands above the noise." if not answer.minima else "No element is supported by these minima."
        return ["  " + said]
    shown = [a for a in answer.assignments if a.verdict != "not supported"]
    if not shown:
        return ["  No element is supported by these minima."]
    rows = [(a.element, a.verdict, probability(a.probability), _amount(a), deciding(a)) for a in shown]
    return columns(("element", "verdict", "probability", "at% approx.", "rests on (eV)"), rows, right=(2, 3))


def _amount(assignment: Assignment) -> str:
    there = assignment.verdict in ("present", "likely") and assignment.abundance
    return f"{percent(assignment.abundance.atomic_percent)}" if there and assignment.abundance else ""


def deciding(assignment: Assignment) -> str:
    """The lines that an element rests on, the strongest first."""
    met = {line.found_ev: line for line in reversed(assignment.lines) if line.found_ev is not None}
    told = [f"{line.transition} {line.found_ev:.0f}" for line in list(met.values())[::-1][:MOST_LINES]]
    more = [f"{len(met) - MOST_LINES} more"] if len(met) > MOST_LINES else []
    return ", ".join([*told, *more])


def _why(answer: Identification) -> Iterator[str]:
    for assignment in answer.assignments:
        if assignment.verdict == "not supported":
            continue
        yield ""
        yield f"{assignment.element}: {assignment.verdict}{_as_state(assignment.state)}"
        called = assignment.verdict in ("present", "likely")
        yield from _sides(assignment.reasons[: MOST_REASONS if called else FEW_REASONS])
    for asked in answer.why_not:
        yield ""
        yield f"Why not {asked.element}? {asked.verdict}, probability {probability(asked.probability)}"
        yield from _sides(asked.reasons)


def _as_state(state: State | None) -> str:
    if state is None:
        return ""
    return f", as {state.name}" + (f" and as {state.second}" if state.second else "")


def _sides(reasons: tuple[Reason, ...]) -> Iterator[str]:
    """The weightiest reasons, those for first, each side named once."""
    side = ""
    for reason in sorted(reasons[:MOST_REASONS], key=lambda r: _SIDES.index(r.side)):
        yield hanging(reason.side if reason.side != side else "", reason.text)
        side = reason.side


_SIDES = ("for", "against", "untested")


def _axis(answer: Identification) -> Iterator[str]:
    from ..identification import UNCALIBRATED

    scale = answer.scale
    if not scale.readings:
        yield _note("axis", "not known: no line to judge it by")
        return
    told = [
        f"{abs(off):.1f} +- {sigma:.1f} eV too {'high' if off >= 0 else 'low'} at {at:.0f} eV"
        for at, off, sigma in scale.readings
    ]
    said = f"reads {' and '.join(told)}, against handbook energies; charging: {scale.charging}"
    yield _note("axis", said if scale.source == UNCALIBRATED else f"{said}; {scale.source}")


def _doubts(answer: Identification) -> Iterator[str]:
    aside = [a for a in answer.assignments if a.verdict == "not supported"]
    if aside:
        yield _note("set aside", ", ".join(f"{a.element} {probability(a.probability)}" for a in aside))
    for pair in answer.inseparable:
        names = " or ".join(pair.elements)
        yield _note("cannot tell", f"{names} at {pair.at_ev:.1f} eV; to settle it, {pair.settle}")
    shown = answer.unexplained[:MOST_UNEXPLAINED]
    for place, left in enumerate(shown):
        near = f"lines near: {', '.join(left.candidates)}" if left.candidates else "no line near"
        text = f"{left.energy_ev:.1f} eV, {left.significance:.0f} times the noise ({near})"
        yield _note("unexplained" if place == 0 else "", text)
    if len(answer.unexplained) > len(shown):
        yield _note("", f"and {len(answer.unexplained) - len(shown)} weaker")


def _not_seen(answer: Identification) -> Iterator[str]:
    usual = [f"{x.element} {percent(x.atomic_percent)}" for x in answer.limits if x.usual]
    if usual:
        more = len(answer.limits) - len(usual)
        rest = f"; {more} rarer elements are in the JSON answer" if more else ""
        yield _note("not seen", f"and would have been called, in 95 of 100 cases, from at%: {', '.join(usual)}{rest}")
    amounts = [a.abundance.factor for a in answer.assignments if a.verdict in ("present", "likely") and a.abundance]
    if amounts:
        least, most = f"{min(amounts):.1f}", f"{max(amounts):.1f}"
        span = least if least == most else f"{least} to {most}"
        said = f"indicative: for a surface alike throughout, each within a factor {span} (one standard deviation)"
        yield _note("at%", said)
    reasons: dict[str, list[Untestable]] = {}
    for item in answer.untestable:
        reasons.setdefault(item.why.split(", the strongest")[0], []).append(item)
    for why, items in reasons.items():
        said = why.replace(" of it ", " of theirs " if len(items) > 1 else " of it ")
        yield _note("untestable", f"{', '.join(item.element for item in items)}: {said}")


def _remarks(answer: Identification) -> Iterator[str]:
    if answer.artefacts:
        yield _note("artefacts", "; ".join(f"{a.energy_ev:.1f} eV, {a.what}" for a in answer.artefacts))
    for text in answer.cautions:
        yield _note("caution", text)
    for text in answer.warnings:
        yield _note("warning", text)
    yield _note("made by", answer.edition)


def _note(label: str, text: str) -> str:
    return hanging(label, _one_line(text), width=14, indent="")
