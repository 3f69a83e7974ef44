"""The answer of `ident scale` in plain text, and its rows for spreadsheets."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from .escape import printable
from .layout import columns, hanging, heading
from .text_assign import printable_lines

if TYPE_CHECKING:
    from ..scale import Deviation, ScaleCalibration

SCALE_COLUMNS = (
    *("metal", "transition", "expected_ev", "found_ev", "sigma_ev", "residual_ev", "used", "status", "source"),
    *("offset_ev", "offset_sigma_ev", "slope", "slope_sigma", "within_3_ev", "deciding", "date", "edition"),
)
VERDICTS = {
    "yes": "keeps to 3 eV",
    "no": "does not keep to 3 eV",
    "cannot tell": "cannot be said to keep to 3 eV or not",
}


def scale_rows(found: ScaleCalibration) -> list[tuple[Any, ...]]:
    """One row per line, in the order of `SCALE_COLUMNS`."""
    return [
        (
            *(line.metal, line.transition, line.expected_ev, line.found_ev, line.sigma_ev, line.residual_ev),
            *("yes" if line.used else "no", line.status, line.source),
            *(found.offset_ev, found.offset_sigma_ev, found.slope, found.slope_sigma),
            *(found.within_3_ev, found.deciding, found.date, found.edition),
        )
        for line in found.lines
    ]


def render_scale(found: ScaleCalibration) -> str:
    """Write a calibration, with an empty line after it."""
    low, high = found.range_ev
    parts = [
        heading(f"Energy axis, {found.summary()}"),
        hanging("spectra", printable(", ".join(found.spectra))),
        hanging("axis", _axis(found)),
        hanging("verdict", f"{VERDICTS[found.within_3_ev]} over {low:.0f} to {high:.0f} eV: {_reads(found.worst)}"),
        hanging("", f"{found.deciding} decides; no claim of conformity with a standard"),
        hanging("fit", f"chi-squared {found.chi2:.1f} at {found.degrees_of_freedom} degrees of freedom"),
        *columns(
            ("line", "stands at (eV)", "found at", "left over", "+- eV", "energy is known"),
            [
                (
                    *(f"{line.metal} {line.transition}", f"{line.expected_ev:.1f}", f"{line.found_ev:.1f}"),
                    *(f"{line.residual_ev:+.1f}", f"{line.sigma_ev:.1f}"),
                    f"{'from ' if line.status == 'read' else ''}{line.source if line.status == 'read' else line.status}"
                    + ("" if line.used else ", set aside"),
                )
                for line in found.lines
            ],
            right=(1, 2, 3, 4),
        ),
    ]
    parts += [hanging("note", printable(note)) for note in found.notes]
    parts.append(hanging("made by", f"tables {found.edition}"))
    return printable_lines(parts) + "\n\n"


def _axis(found: ScaleCalibration) -> str:
    slope = f"slope {found.slope:+.3%} +- {found.slope_sigma:.3%}"
    given = "" if found.slope_from == "lines" else f", {found.slope_from}"
    return f"offset {found.offset_ev:+.2f} +- {found.offset_sigma_ev:.2f} eV, {slope}{given}, from the Fermi level"


def _reads(worst: Deviation) -> str:
    side = "high" if worst.deviation_ev >= 0 else "low"
    return f"{abs(worst.deviation_ev):.1f} +- {worst.sigma_ev:.1f} eV too {side} at {worst.energy_ev:.0f} eV, its worst"
