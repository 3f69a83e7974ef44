"""The part of a page that is about one spectrum."""

from __future__ import annotations

import base64
from collections.abc import Mapping
from dataclasses import dataclass, replace
from io import BytesIO
from typing import TYPE_CHECKING, Any

from ..figure_labels import Label, labels_of
from ..layout import percent, probability
from ..palette import MARKS, PAPER
from .about import About, Decision
from .assignments import asked_about, assignments_table
from .claims import minima_table
from .curves import curve_data
from .doubts import artefacts, doubts, not_seen
from .header import header_entries, header_list
from .marks import mark
from .markup import Markup, el, group
from .repeat import repeat_list

if TYPE_CHECKING:
    from ...identification import Assignment, Examination, Identification

DOTS_PER_INCH = 150
MOST_LINES = 3  # of what is only possible, in pages of very many spectra
COLOURS = 48  # of the printed figure: its ink, paper, marks and the shades between


@dataclass(frozen=True, kw_only=True, eq=False)
class Sheet:
    """One spectrum, rendered but for its printed figure."""

    anchor: str
    answer: Identification
    told: Mapping[str, str]  # entries of [report] that hold for it
    decisions: Mapping[str, Decision]
    body: Markup  # below the plot
    lean: Markup  # the same with less of what is only possible, for pages of very many spectra
    side: Markup  # beside the plot
    data: dict[str, Any]

    @property
    def name(self) -> str:
        """What was measured, or else the file."""
        return str(self.told.get("sample") or self.answer.header.get("sample") or self.answer.spectrum)


def make_sheet(examination: Examination, number: int, about: About, reading: Mapping[str, Any]) -> Sheet:
    """Render one spectrum; `number` counts from 0."""
    answer, anchor = examination.answer, f"s{number}"
    labels = labels_of(answer)
    told, decided = about.report_of(answer.spectrum), about.decisions_on(answer.spectrum)
    lean = replace(examination, answer=trimmed(answer))
    return Sheet(
        anchor=anchor,
        answer=answer,
        told=told,
        decisions=decided,
        body=_body(examination, labels, decided, anchor, reading),
        lean=_body(lean, labels, decided, anchor, reading),
        side=_chooser(answer),
        data=curve_data(examination, labels),
    )


def trimmed(answer: Identification) -> Identification:
    """Leave out the reasons and most lines of what is only possible, and the limits of rarer elements."""
    assignments = tuple(
        a if a.verdict in ("present", "likely")
        else replace(a, reasons=(), rivals=(), lines=tuple(x for x in a.lines if x.status == "met")[:MOST_LINES])
        for a in answer.assignments
    )  # fmt: skip
    return replace(answer, assignments=assignments, limits=tuple(limit for limit in answer.limits if limit.usual))


def _body(
    examination: Examination, labels: tuple[Label, ...], decided: Mapping[str, Decision], anchor: str,
    reading: Mapping[str, Any],
) -> Markup:  # fmt: skip
    """What stands below the plot."""
    answer = examination.answer
    parts = (
        ("Elements and reasons", assignments_table(answer, decided, anchor)),
        ("Minima", minima_table(examination, labels, anchor)),
        ("Left open", doubts(answer)),
        ("Not seen", not_seen(answer)),
        ("Artefacts", artefacts(answer)),
        ("To repeat it", repeat_list(answer, reading)),
    )
    sections = []
    for title, part in parts:
        more = asked_about(answer.why_not) if title == "Elements and reasons" else None
        sections.append(el("section", el("h3", title), part, more))
    return group(*sections)


def article(sheet: Sheet, figure: bytes | None, body: Markup, *, alone: bool) -> Markup:
    """Put a sheet together; `figure` is what is shown on paper and where no script runs, `body` one of its two."""
    answer = sheet.answer
    ranges = ", ".join(f"{low:.0f} to {high:.0f} eV" for low, high in answer.ranges_ev)
    what = f"{answer.spectrum}: {answer.kind} spectrum, {ranges}, {answer.minima} minima above the noise"
    head = el("h2", "Spectrum", cls="unseen") if alone else el("h2", sheet.name)
    entries = header_list(header_entries(answer, sheet.told), sheet.told.get("remark"))
    place = el("div", _printed(sheet, figure), cls="plot-place")
    return el(
        "article",
        head,
        el("p", what, cls="what"),
        entries,
        el("div", sheet.side, place, cls="beside"),
        body,
        None if alone else el("p", el("a", "back to the summary", href="#summary"), cls="screen-only"),
        id=sheet.anchor,
        aria_label=f"spectrum {answer.spectrum}",
    )


def _printed(sheet: Sheet, figure: bytes | None) -> Markup | None:
    if figure is None:
        return None
    encoded = base64.b64encode(figure).decode("ascii")
    said = (
        f"Figure of {sheet.answer.spectrum}: differential and direct spectrum with the minima labelled. "
        "The table of minima says the same in words."
    )
    return el("img", src=f"data:image/png;base64,{encoded}", alt=said, cls="printed")


def drawn(examination: Examination) -> bytes:
    """Draw the figure of a spectrum as a PNG of few colours, so that it is small."""
    from PIL import Image as Picture

    from ..figure import make_figure

    sheet = BytesIO()
    unsigned = {"Software": None}  # the same answer gives the same file
    make_figure(examination).savefig(sheet, format="png", dpi=DOTS_PER_INCH, facecolor=PAPER, metadata=unsigned)
    small = BytesIO()
    with Picture.open(sheet) as picture:
        picture.convert("RGB").quantize(COLOURS).save(small, "PNG", optimize=True)
    return small.getvalue()


def _chooser(answer: Identification) -> Markup:
    """Buttons that show the expected pattern of an element."""
    shown = [a for a in answer.assignments if a.verdict != "not supported"]
    if not shown:
        said = "No element is supported." if answer.minima else "Nothing stands above the noise."
        return el("div", el("p", said), cls="chooser")
    buttons = [_choice(assignment) for assignment in shown]
    pressed = {"data_element": "", "aria_pressed": "true", "cls": "choice none"}
    none = el("li", el("button", "none of them", type="button", **pressed))
    return el(
        "div",
        el("h3", "Assignments"),
        el("p", "Choose one to see its whole expected pattern in the spectrum.", cls="hint screen-only"),
        el("ul", *buttons, none),
        cls="chooser",
        role="group",
        aria_label="element whose expected pattern is shown",
    )


def _choice(assignment: Assignment) -> Markup:
    role = assignment.verdict
    if role == "not supported":
        return Markup()
    amount = assignment.abundance if role in ("present", "likely") else None
    inside = group(
        mark(role),
        el("b", assignment.element),
        el("span", MARKS[role].word),
        el("span", probability(assignment.probability), cls="chance"),
        el("span", f"{percent(amount.atomic_percent)} at%" if amount else "", cls="amount"),
    )
    button = el(
        "button", inside, type="button", data_element=assignment.element, aria_pressed="false", cls=f"choice {role}"
    )
    return el("li", button)
