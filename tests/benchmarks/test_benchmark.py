"""The benchmark's fast part: ident beside the plain way, and nothing on smooth backgrounds."""

from __future__ import annotations

import pytest

from .plain_way import call_plainly
from .run import cases_of, ident_caller, run_backgrounds, run_cases

pytestmark = pytest.mark.slow


def test_surveys_are_called_well_and_better_than_the_plain_way() -> None:
    # Truth: the forward model's own; it shares no line table with the matcher. Limits: this project's aims
    # (0.92 on 150 surveys), loosened for the spread of 40.
    cases = cases_of("surveys", 40, "reported")
    ours = run_cases("ident", ident_caller(), cases).summary
    plain = run_cases("plain way", call_plainly, cases).summary
    assert ours.f1_mean >= 0.85
    assert ours.f1_mean > plain.f1_mean


def test_nothing_is_present_on_smooth_backgrounds() -> None:
    # Truth: no line was put in.
    outcome = run_backgrounds("ident", ident_caller(), cases_of("background", 60, "reported"))
    assert outcome.present == ()
