"""The answer of `ident contrast` in plain text and as rows for a spreadsheet."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING, Any

from .escape import printable
from .layout import columns, hanging, heading, probability
from .text_assign import printable_lines

if TYPE_CHECKING:
    from ..contrasting import Contrast, Difference

CONTRAST_COLUMNS = (
    *("suspect", "clean", "element", "verdict", "probability", "probability_clean", "ratio", "ratio_factor"),
    *("at_least_or_most", "above_scatter", "lines", "relative_to", "reasons", "edition"),
)


def render_contrast(answer: Contrast) -> str:
    """Write a comparison, with an empty line after it."""
    parts = [
        heading(printable(f"{answer.suspect}: suspect against clean")),
        hanging("clean", printable(", ".join(answer.clean))),
        hanging("ratios", _basis(answer)),
        "",
    ]
    rows = [_row(one) for one in answer.differences]
    head = ("element", "verdict", "suspect", "clean", "ratio", "within a factor", "compared on")
    parts += columns(head, rows, right=(2, 3, 4, 5)) if rows else ["  nothing could be compared"]
    for one in answer.differences:
        if one.verdict != "unchanged":
            parts += ["", f"{one.element}: {one.verdict}", *_why(one)]
    parts += [""]
    parts += [hanging("apart", f"{one.element}: {one.why}") for one in answer.not_comparable]
    parts += [hanging("hint", f"{one.pattern}: {one.text} ({one.source})") for one in answer.hints]
    if not answer.hints:
        parts.append(hanging("hint", "none: what differs is no residue of the table"))
    parts += [hanging("caution", printable(text)) for text in answer.cautions]
    parts += [hanging("warning", printable(text)) for text in answer.warnings]
    parts.append(hanging("made by", answer.edition))
    return printable_lines(parts) + "\n\n"


def _basis(answer: Contrast) -> str:
    basis = "all that was found, each over its sensitivity" if answer.relative_to == "total" else answer.relative_to
    spread = f"; clean ones differ by a factor {answer.scatter:.2f}, as a rule" if answer.scatter is not None else ""
    return f"suspect over clean, relative to {basis}{spread}"


def _row(one: Difference) -> tuple[str, ...]:
    return (
        one.element,
        one.verdict,
        probability(one.probability),
        probability(one.probability_clean),
        ratio_told(one),
        "" if one.ratio_factor is None else f"{one.ratio_factor:.2g}",
        ", ".join(one.lines),
    )


def ratio_told(one: Difference) -> str:
    """Say a ratio, or the bound that stands for it."""
    if one.ratio is not None:
        return f"{one.ratio:.2g}"
    if one.limit is None:
        return "-"
    return f"{'>' if one.verdict == 'only on suspect' else '<'} {one.limit:.2g}"


def _why(one: Difference) -> Iterator[str]:
    for reason in one.reasons:
        yield hanging(reason.side, reason.text)


def contrast_rows(answer: Contrast) -> list[tuple[Any, ...]]:
    """One row per element compared."""
    return [
        (
            *(answer.suspect, "; ".join(answer.clean), one.element, one.verdict, one.probability),
            *(one.probability_clean, one.ratio, one.ratio_factor, one.limit, one.above_scatter),
            *("; ".join(one.lines), answer.relative_to, "; ".join(f"{r.side}: {r.text}" for r in one.reasons)),
            answer.edition,
        )
        for one in answer.differences
    ]
