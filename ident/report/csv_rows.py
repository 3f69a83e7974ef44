"""Tables for spreadsheets: a header once, then a row per item."""

from __future__ import annotations

import csv
import io
import math
from collections.abc import Iterable, Sequence
from typing import TYPE_CHECKING, Any

from .escape import text_cell

if TYPE_CHECKING:
    from ..identification import Assignment, Identification
    from ..lookup import Candidate, ElementCard
    from ..minima import Analysis
    from ..scale import ScaleCalibration

ASSIGN_COLUMNS = (
    *("spectrum", "sample", "element", "z", "probability", "verdict", "lines_met", "lines_missing", "state"),
    *("shift_ev", "reasons_for", "reasons_against", "untested", "offset_ev", "charging", "edition"),
    *("indicative_atomic_percent", "atomic_percent_factor"),
)
AT_COLUMNS = (
    *("energy_ev", "element", "transition", "expected_ev", "sigma_ev", "deviation_ev", "relative_height", "weight"),
    *("needs", "reasons"),
)
ELEMENT_COLUMNS = (
    *("element", "z", "transition", "energy_ev", "sigma_ev", "energy_kind", "relative_height", "height_kind"),
    *("state", "rivals", "deciding", "source", "mean_free_path_nm", "mean_free_path_factor", "depth_nm"),
)
MINIMA_COLUMNS = (*("spectrum", "energy_ev", "sigma_ev", "depth", "peak_to_peak", "width_ev", "significance"),)
CORRECTED_COLUMNS = ("corrected_ev", "corrected_sigma_ev")


def render_rows(rows: Iterable[Sequence[Any]]) -> str:
    """Write rows as CSV; texts are escaped, numbers keep six digits, what is unknown is empty."""
    out = io.StringIO()
    writer = csv.writer(out, lineterminator="\n")
    for row in rows:
        writer.writerow([_cell(value) for value in row])
    return out.getvalue()


def _cell(value: Any) -> str:
    if value is None:
        return ""
    if isinstance(value, float):
        return f"{value:.6g}" if math.isfinite(value) else ""
    return text_cell(value) if isinstance(value, str) else str(value)


def assign_rows(answer: Identification) -> list[tuple[Any, ...]]:
    """One row per element of an answer, in the order of `ASSIGN_COLUMNS`."""
    return [_assign_row(answer, assignment) for assignment in answer.assignments]


def _assign_row(answer: Identification, assignment: Assignment) -> tuple[Any, ...]:
    by_side = {
        side: "; ".join(reason.text for reason in assignment.reasons if reason.side == side)
        for side in ("for", "against", "untested")
    }
    state, amount = assignment.state, assignment.abundance
    return (
        *(answer.spectrum, answer.header.get("sample"), assignment.element, assignment.z),
        *(assignment.probability, assignment.verdict),
        *(_lines(assignment, "met"), _lines(assignment, "missing")),
        *(state.name if state else None, state.shift_ev if state else None),
        *(by_side["for"], by_side["against"], by_side["untested"]),
        *(answer.scale.offset_ev, answer.scale.charging, answer.edition),
        *((amount.atomic_percent, amount.factor) if amount else (None, None)),
    )


def _lines(assignment: Assignment, status: str) -> str:
    return " ".join(line.transition for line in assignment.lines if line.status == status)


def at_rows(energy_ev: float, candidates: Sequence[Candidate]) -> list[tuple[Any, ...]]:
    """One row per candidate, in the order of `AT_COLUMNS`."""
    return [
        (
            *(energy_ev, c.element, c.transition, c.expected_ev, c.sigma_ev, c.deviation_ev, c.relative_height),
            *(c.weight, "; ".join(f"{n.transition} {n.energy_ev:.0f}" for n in c.needs)),
            "; ".join(reason.text for reason in c.reasons),
        )
        for c in candidates
    ]


def element_rows(card: ElementCard) -> list[tuple[Any, ...]]:
    """One row per line of an element, in the order of `ELEMENT_COLUMNS`."""
    decides = card.deciding.transition if card.deciding else ""
    return [
        (
            *(card.element, card.z, line.transition, line.energy_ev, line.sigma_ev, line.energy_kind),
            *(line.relative_height, line.height_kind, line.state),
            "; ".join(f"{r.element} {r.transition} {r.energy_ev:.0f}" for r in line.rivals),
            *("yes" if line.transition == decides else "no", line.source),
            *(line.mean_free_path_nm, line.mean_free_path_factor, line.depth_nm),
        )
        for line in card.lines
    ]


def minima_rows(analysis: Analysis, scale: ScaleCalibration | None = None) -> list[tuple[Any, ...]]:
    """One row per minimum, in the order of `MINIMA_COLUMNS`, and of `CORRECTED_COLUMNS` with a calibration."""
    return [
        (
            *(analysis.spectrum.name, m.energy_ev, m.sigma_ev, m.depth, m.peak_to_peak, m.width_ev, m.significance),
            *(() if scale is None else scale.corrected(m.energy_ev, m.sigma_ev)),
        )
        for m in analysis.minima
    ]
