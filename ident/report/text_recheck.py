"""The answer of `ident recheck` in plain text and as rows for a spreadsheet."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING, Any

from .escape import printable
from .layout import columns, hanging, heading, probability
from .text_assign import printable_lines

if TYPE_CHECKING:
    from ..rechecking import LabelOpinion, Missed, Recheck

MOST_REASONS = 5
LONGEST_LABEL = 28
RECHECK_COLUMNS = (
    *("spectrum", "line", "energy_ev", "label", "read_as", "verdict", "better", "choices", "probability"),
    *("minimum_ev", "reasons", "edition"),
)


def render_recheck(answer: Recheck) -> str:
    """Write a second opinion, with an empty line after it."""
    counted = ", ".join(f"{count} {verdict}" for verdict, count in answer.counts.items() if count)
    parts = [heading(printable(f"{answer.spectrum}: second opinion")), f"  {len(answer.labels)} labels: {counted}", ""]
    head = ("label", "at (eV)", "read as", "verdict", "better", "probability")
    parts += columns(head, [_row(label) for label in answer.labels], right=(1, 5))
    for label in answer.labels:
        if label.verdict != "agrees":
            parts += ["", *_why(label)]
    parts += ["", *_missed("missed", answer.missed), *_missed("perhaps", answer.perhaps_missed)]
    if not answer.missed:
        parts.append(hanging("missed", "no element of probability 0.5 or more is without a label"))
    parts += [hanging("read", text) for text in _readings(answer)]
    parts += [hanging("caution", printable(text)) for text in answer.cautions]
    parts += [hanging("warning", printable(text)) for text in answer.warnings]
    parts.append(hanging("made by", answer.edition))
    return printable_lines(parts) + "\n\n"


def _row(label: LabelOpinion) -> tuple[str, ...]:
    return (
        _short(label.label),
        "" if label.energy_ev is None else f"{label.energy_ev:.1f}",
        label.read_as or "-",
        label.verdict,
        ", ".join(label.better) or ("which: " + ", ".join(label.choices) if label.choices else ""),
        "" if label.probability is None else probability(label.probability),
    )


def _short(text: str) -> str:
    shown = printable(text) or "(empty)"
    return shown if len(shown) <= LONGEST_LABEL else shown[: LONGEST_LABEL - 3] + "..."


def _why(label: LabelOpinion) -> Iterator[str]:
    where = "" if label.energy_ev is None else f" at {label.energy_ev:.1f} eV"
    yield f"{_short(label.label)}{where}: {label.verdict}"
    for reason in label.reasons[:MOST_REASONS]:
        yield hanging(reason.side, printable(reason.text))


def _missed(title: str, missed: tuple[Missed, ...]) -> list[str]:
    if not missed:
        return []
    told = [
        item.element
        + (f" at {item.energy_ev:.1f} eV" if item.energy_ev is not None else "")
        + f" ({probability(item.probability)})"
        for item in missed
    ]
    return [hanging(title, "no label names " + ", ".join(told))]


def _readings(answer: Recheck) -> Iterator[str]:
    """What was corrected or chosen in reading labels that agree; the others tell it among their reasons."""
    for label in answer.labels:
        if label.verdict == "agrees":
            for reason in label.reasons:
                if reason.code in ("name-corrected", "label-unclear"):
                    yield printable(f"{_short(label.label)}: {reason.text}")


def recheck_rows(answer: Recheck) -> list[tuple[Any, ...]]:
    """One row per label, in the order of `RECHECK_COLUMNS`; then one per element missed."""
    rows: list[tuple[Any, ...]] = [
        (
            *(answer.spectrum, label.line, label.energy_ev, label.label, label.read_as, label.verdict),
            *(" ".join(label.better), " ".join(label.choices), label.probability, label.minimum_ev),
            *("; ".join(f"{reason.side}: {reason.text}" for reason in label.reasons), answer.edition),
        )
        for label in answer.labels
    ]
    rows += [
        (
            *(answer.spectrum, None, item.energy_ev, None, item.element, "missed"),
            *(None, None, item.probability, item.energy_ev, None, answer.edition),
        )
        for item in answer.missed
    ]
    return rows
