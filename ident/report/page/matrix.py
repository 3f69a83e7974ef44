"""The summary of many spectra: one row a spectrum, one column an element, each cell opening its spectrum."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING

from ...names import name_of
from ..layout import percent, probability
from .about import Decision
from .marks import mark
from .markup import Markup, el, group

if TYPE_CHECKING:
    from ...identification import Assignment, Identification


def matrix(
    answers: Sequence[Identification], anchors: Sequence[str], decisions: Sequence[Mapping[str, Decision]]
) -> Markup:
    """Show every element that is present, likely or possible in one of the spectra, by atomic number."""
    columns = sorted(
        {(a.z, a.element) for answer in answers for a in answer.assignments if a.verdict != "not supported"}
    )
    head = el(
        "tr",
        el("th", "spectrum", scope="col"),
        *(el("th", el("abbr", symbol, title=name_of(symbol)), scope="col") for _, symbol in columns),
    )
    folder = _folder([answer.spectrum for answer in answers])
    rows = [
        el("tr", _name(answer, anchor, folder), *(_cell(symbol, answer, anchor, decided) for _, symbol in columns))
        for answer, anchor, decided in zip(answers, anchors, decisions, strict=True)
    ]
    where = f" Files in {folder}" if folder else ""
    said = f"Elements in each spectrum, with their probability; a cell opens its spectrum there.{where}"
    caption = el("caption", said)
    key = el(
        "p",
        *(el("span", sign, f" {word}") for sign, word in (
            (mark("present"), "present (0.95 and more)"), (mark("likely"), "likely (0.5 and more)"),
            (mark("possible"), "possible (0.05 and more)"), (el("b", "·"), "not supported"),
            (el("b", "n/t"), "not testable in this scan"), (el("s", "0.99"), "overruled by the analyst"),
        )),
        cls="key",
    )  # fmt: skip
    table = el("table", caption, el("thead", head), el("tbody", *rows), cls="matrix")
    wide = el("div", table, cls="wide", tabindex="0", role="region", aria_label="summary of elements in each spectrum")
    return el("section", el("h2", "Summary"), wide, key, id="summary")


def _folder(names: Sequence[str]) -> str:
    """The folder that all files are in, with its last slash; nothing where they share none."""
    folders = [name.rpartition("/")[0] for name in names]
    return f"{folders[0]}/" if folders[0] and all(folder == folders[0] for folder in folders) else ""


def _name(answer: Identification, anchor: str, folder: str) -> Markup:
    sample = answer.header.get("sample")
    under = el("span", str(sample), cls="sample") if sample else None
    return el("th", el("a", answer.spectrum.removeprefix(folder), href=f"#{anchor}"), under, scope="row")


def _cell(symbol: str, answer: Identification, anchor: str, decided: Mapping[str, Decision]) -> Markup:
    found = next((a for a in answer.assignments if a.element == symbol), None)
    if found is not None and found.verdict != "not supported":
        return _found(found, answer, anchor, decided.get(symbol))
    if any(item.element == symbol for item in answer.untestable):
        return el("td", el("a", "n/t", href=f"#{anchor}"))
    return el("td", el("a", "·", href=f"#{anchor}", aria_label="not supported"))


def _found(found: Assignment, answer: Identification, anchor: str, decision: Decision | None) -> Markup:
    role = found.verdict
    if role == "not supported":
        return el("td")
    chance = probability(found.probability)
    amount = f", about {percent(found.abundance.atomic_percent)} at%" if found.abundance and role != "possible" else ""
    said = f"{role}, {chance}{amount}"
    if decision is not None and decision.decision:
        said += f"; {decision.decision} by the analyst"
    shown = el("s", chance) if decision is not None and decision.decision == "overruled" else chance
    inside = group(mark(role), el("span", shown))
    href = f"#{anchor}-{found.element}"
    return el("td", el("a", inside, href=href, aria_label=said, title=said), cls=role)
