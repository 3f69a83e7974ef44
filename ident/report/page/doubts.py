"""What the answer leaves open, and what it must say along: doubts, limits, artefacts, cautions."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import TYPE_CHECKING

from ...identification.cautions import LEAVE_IT
from ..layout import percent, probability
from .markup import Markup, Part, el, group

if TYPE_CHECKING:
    from ...identification import FurtherScan, Identification, Limit, Untestable


def doubts(answer: Identification) -> Markup:
    """Give what cannot be told, what is unexplained, and what was set aside."""
    parts = [*_inseparable(answer), *_unexplained(answer), *_set_aside(answer), *_warnings(answer)]
    return group(*parts) if parts else el("p", "Nothing.")


def _inseparable(answer: Identification) -> Iterator[Markup]:
    if answer.inseparable:
        head = el("tr", *(el("th", w, scope="col") for w in ("cannot be told apart", "at, eV", "what would settle it")))
        rows = [
            el(
                "tr",
                el("th", " or ".join(pair.elements), scope="row"),
                el("td", f"{pair.at_ev:.1f}"),
                el("td", pair.settle, _scans(pair.scans[1:])),
            )
            for pair in answer.inseparable
        ]
        caption = el("caption", "Elements that this scan cannot tell apart")
        yield el("div", el("table", caption, el("thead", head), el("tbody", *rows), cls="small n2"), cls="wide")


def _scans(scans: Sequence[FurtherScan]) -> Markup | None:
    """The further scans that would decide too, best first."""
    told = [
        el("li", f"or {scan.low_ev:.0f} to {scan.high_ev:.0f} eV: {scan.element} {scan.transition}; "
                 f"{scan.dwell:.2g} times this dwell, {scan.information_bits:.2g} bits expected")
        for scan in scans
    ]  # fmt: skip
    return el("ul", *told) if told else None


def _unexplained(answer: Identification) -> Iterator[Markup]:
    if answer.unexplained:
        head = el("tr", *(el("th", w, scope="col") for w in ("unexplained, eV", "times noise", "lines near it")))
        rows = [
            el(
                "tr",
                el("th", f"{left.energy_ev:.1f}", scope="row"),
                el("td", f"{left.significance:.0f}"),
                el("td", ", ".join(left.candidates) or "none"),
            )
            for left in answer.unexplained
        ]
        caption = el("caption", "Minima that no element explains, or only poorly; a strong one is worth a second look")
        yield el("div", el("table", caption, el("thead", head), el("tbody", *rows), cls="small n1 n2"), cls="wide")


def _set_aside(answer: Identification) -> Iterator[Markup]:
    aside = [a for a in answer.assignments if a.verdict == "not supported"]
    if aside:
        told = ", ".join(f"{a.element} {probability(a.probability)}" for a in aside)
        yield el("p", el("b", "Set aside (probability below 0.05): "), told)


def _warnings(answer: Identification) -> Iterator[Markup]:
    if answer.warnings:
        yield el("p", el("b", "Warnings"))
        yield el("ul", *(el("li", warning) for warning in answer.warnings))


def not_seen(answer: Identification) -> Markup:
    """Give from what amount on absent elements would have been called, and what could not be tested."""
    usual = [limit for limit in answer.limits if limit.usual]
    rarer = [limit for limit in answer.limits if not limit.usual]
    parts: list[Part] = []
    if answer.limits:
        said = "Not seen, and would have been called, in 95 of 100 cases, from this amount on (atomic per cent; line):"
        parts.append(el("p", said))
        parts.append(_limits(usual) if usual else None)
        if rarer:
            opening = el("summary", f"{len(rarer)} rarer elements")
            parts.append(el("details", opening, _limits(rarer)))
    parts += _untestable(answer.untestable)
    return group(*parts)


def _limits(limits: Sequence[Limit]) -> Markup:
    items = (
        el("li", el("b", x.element), f" {percent(x.atomic_percent)}", el("span", f" {x.line_ev:.0f} eV", cls="faint"))
        for x in limits
    )
    return el("ul", *items, cls="limits")


def _untestable(items: Sequence[Untestable]) -> list[Markup]:
    """Group the elements that share a cause."""
    causes: dict[str, list[str]] = {}
    for item in items:
        causes.setdefault(item.why.split(", the strongest")[0], []).append(item.element)
    return [
        el("p", el("b", "Untestable: "), f"{', '.join(elements)}: ", why.replace(" of it ", " of theirs "))
        for why, elements in causes.items()
    ]


def artefacts(answer: Identification) -> Markup:
    """List what is no line."""
    if not answer.artefacts:
        return el("p", "None found.")
    return el("ul", *(el("li", f"{note.energy_ev:.1f} eV: {note.what}") for note in answer.artefacts))


def cautions(texts: Sequence[str]) -> Markup:
    """List the cautions, each once, with what holds for every report of this kind."""
    always = [text for text in ALWAYS if not any(said.startswith(text[:LIKE]) for said in texts)]
    return el("ul", *(el("li", text) for text in [*dict.fromkeys(texts), *always]), cls="cautions")


LIKE = 20  # letters by which a caution of the answer says already what holds always
ALWAYS = (
    "Auger data alone do not give oxidation states or compounds reliably.",
    "The electron beam itself can change a surface: insulators, halides, adsorbates and organic films most of all.",
    LEAVE_IT,
)
