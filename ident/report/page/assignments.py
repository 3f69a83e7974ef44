"""The table of assignments, each opening into its reasons, lines and rivals, with the analyst's column."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING

from ...names import name_of
from ..layout import percent, probability
from ..palette import MARKS
from ..text_assign import deciding
from .about import Decision
from .marks import mark
from .markup import Markup, Part, el, group, lines

if TYPE_CHECKING:
    from ...identification import Assignment, Identification, LineNote, WhyNot
    from ...reasons import Reason

SIDES = {"for": "speaks for it", "against": "speaks against it", "untested": "could not be tested"}
SIGNS = {"for": "+", "against": "−", "untested": "?"}
HEADS = ("element", "verdict", "probability", "at% approx.", "rests on (eV)", "analyst")


def assignments_table(answer: Identification, decisions: Mapping[str, Decision], anchor: str) -> Markup:
    """List what is present, likely or possible, each with a row that opens into the reasons."""
    shown = [a for a in answer.assignments if a.verdict != "not supported"]
    known = {a.element for a in shown}
    groups = [el("tbody", *_rows(a, decisions.get(a.element), anchor)) for a in shown]
    groups += [el("tbody", _only_decided(d, answer)) for d in decisions.values() if d.element not in known]
    if not groups:
        said = "No element is supported by these minima." if answer.minima else "Nothing stands above the noise."
        return el("p", said)
    caption = el("caption", "Elements, the likeliest first. Open a row for its reasons.")
    head = el("tr", *(el("th", word, scope="col") for word in HEADS))
    return el("div", el("table", caption, el("thead", head), *groups, cls="assignments n3 n4"), cls="wide")


def _rows(assignment: Assignment, decision: Decision | None, anchor: str) -> list[Markup]:
    role = assignment.verdict
    if role == "not supported":
        return []
    sure = role in ("present", "likely")
    amount = assignment.abundance if sure else None
    state = el("span", f" as {_state(assignment)}", cls="faint") if assignment.state else None
    overruled = decision is not None and decision.decision == "overruled"
    name = el("span", assignment.element, cls="symbol overruled" if overruled else "symbol")
    share = (
        group(f"{percent(amount.atomic_percent)}", el("span", f" ×÷ {amount.factor:.1f}", cls="faint"))
        if amount
        else ""
    )
    row = el(
        "tr",
        el("th", name, el("span", f" {name_of(assignment.element)}", cls="name"), state, scope="row"),
        el("td", mark(role), f" {MARKS[role].word}"),
        el("td", probability(assignment.probability)),
        el("td", share),
        el("td", deciding(assignment), cls="rests"),
        _analyst(decision),
        id=f"{anchor}-{assignment.element}",
        cls="sure" if sure else "unsure",
    )
    opening = el("summary", _summary(assignment))
    why = el("tr", el("td", el("details", opening, *_why(assignment)), colspan=len(HEADS)), cls="why-row")
    return [row, why]


def _state(assignment: Assignment) -> str:
    state = assignment.state
    if state is None:
        return ""
    return state.name + (f" and as {state.second}" if state.second else "")


def _analyst(decision: Decision | None) -> Markup:
    if decision is None:
        return el("td", el("span", "no entry", cls="missing"), cls="analyst")
    sign = {"accepted": "✓ ", "overruled": "✗ "}.get(decision.decision or "", "")
    word = el("b", f"{sign}{decision.decision}") if decision.decision else None
    remark = el("div", lines(decision.remark), cls="remark") if decision.remark else None
    return el("td", word, remark, cls="analyst")


def _only_decided(decision: Decision, answer: Identification) -> Markup:
    """An element that the analyst decides on and the program does not name."""
    found = next((a for a in answer.assignments if a.element == decision.element), None)
    element = el("span", decision.element, cls="symbol")
    return el(
        "tr",
        el("th", element, el("span", f" {name_of(decision.element)}", cls="name"), scope="row"),
        el("td", "not supported" if found else "not named by the program"),
        el("td", probability(found.probability) if found else ""),
        el("td"),
        el("td"),
        _analyst(decision),
        cls="unsure",
    )


def _summary(assignment: Assignment) -> str:
    counts = {side: sum(r.side == side for r in assignment.reasons) for side in SIDES}
    told = ", ".join(f"{number} {side}" for side, number in counts.items() if number)
    return f"{assignment.element}: reasons ({told})" if told else f"{assignment.element}: lines"


def _why(assignment: Assignment) -> list[Part]:
    parts: list[Part] = [*reason_lists(assignment.reasons)]
    if assignment.lines:
        parts.append(_lines(assignment.lines))
    if assignment.rivals:
        told = [f"{rival.text}, at {rival.at_ev:.1f} eV" for rival in assignment.rivals]
        parts.append(el("p", el("b", "Rivals: "), "; ".join(told)))
    return parts


def reason_lists(reasons: Sequence[Reason]) -> list[Markup]:
    """Give the reasons side by side of the question, the weightiest first."""
    out = []
    for side, words in SIDES.items():
        own = [reason for reason in reasons if reason.side == side]
        if own:
            head = el("p", el("span", SIGNS[side], cls="sign", aria_hidden="true"), f" {words}", cls="side")
            items = (el("li", reason.text, el("code", reason.code)) for reason in own)
            out.append(el("div", head, el("ul", *items), cls=f"reasons {side}"))
    return out


def _lines(notes: Sequence[LineNote]) -> Markup:
    words = ("line", "expected, eV", "found, eV", "its part of that minimum", "relative depth", "status")
    head = el("tr", *(el("th", word, scope="col") for word in words))
    rows = [
        el(
            "tr",
            el("th", note.transition, scope="row"),
            el("td", f"{note.expected_ev:.1f} ± {note.sigma_ev:.1f}"),
            el("td", "" if note.found_ev is None else f"{note.found_ev:.1f}"),
            el("td", "" if note.share is None else f"{100 * note.share:.0f} %"),
            el("td", f"{note.relative_height:.2f}"),
            el("td", note.status),
        )
        for note in notes
    ]
    caption = el("caption", "Its lines, the strongest first, on the axis of the spectrum")
    return el("div", el("table", caption, el("thead", head), el("tbody", *rows), cls="lines n2 n3 n4 n5"), cls="wide")


def asked_about(asked: Sequence[WhyNot]) -> Markup | None:
    """Say of the elements that were asked about why they are not named."""
    if not asked:
        return None
    parts = []
    for one in asked:
        told = f"{one.element}: {one.verdict}, probability {probability(one.probability)}"
        parts.append(el("div", el("h4", told), *reason_lists(one.reasons), cls="asked"))
    return el("section", el("h3", "Why not?"), *parts)
