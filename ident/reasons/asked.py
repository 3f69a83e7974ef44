"""Why not this one? Reasons about an element that was asked about and that the answer does not name."""

from __future__ import annotations

from typing import TYPE_CHECKING

from .reason import Reason
from .rules import explain

if TYPE_CHECKING:
    from ..matching.evidence import AskedEvidence, Evidence

NO_LINES = ("H", "He")
ASKED_CODES = ("no-auger-line", "ruled-out", "nothing-near", "below-limit")  # beside those of the rules


def explain_asked(asked: AskedEvidence, evidence: Evidence) -> tuple[Reason, ...]:
    """Give the reasons about an element that was asked about, weightiest first."""
    if asked.element in NO_LINES:
        return (_untested("no-auger-line", f"{asked.element} has too few electrons for an Auger transition"),)
    if asked.ruled_out:
        return (_untested("ruled-out", "it was ruled out, so that nothing was weighed for it"),)
    reasons = explain(asked.weighed, evidence) if asked.weighed else (_nothing_near(asked),)
    if asked.limit is not None:
        amount = f"{asked.limit.atomic_percent:.2g} at% of it would have been called, in 95 of 100 cases"
        reasons += (Reason(code="below-limit", side="untested", text=f"from {amount}; less may be there unseen"),)
    return reasons


def _nothing_near(asked: AskedEvidence) -> Reason:
    if asked.expected_ev is None:
        return _untested("line-out-of-range", "no strong line of it lies in the scan")
    nearest = f"; the nearest is at {asked.nearest_ev:.1f} eV" if asked.nearest_ev is not None else ""
    text = f"no minimum stands within reach of {asked.expected_ev:.1f} eV ({asked.transition}), its strongest line here"
    return Reason(code="nothing-near", side="against", text=text + nearest)


def _untested(code: str, text: str) -> Reason:
    return Reason(code=code, side="untested", text=text)
