"""Labels with seeded errors: they are found, and right labels are left alone."""

from __future__ import annotations

import pytest

from .labels import labelled, measure, total

pytestmark = pytest.mark.slow


def test_seeded_errors_are_flagged_and_right_labels_are_not_disputed() -> None:
    # Truth: the forward model's own, and what was spoilt. Aims of this project on 200 surveys: 95 % of the errors
    # flagged, 3 % of the right labels disputed; loosened here for the spread of 30 surveys.
    tallies = measure(range(3000, 3030))
    errors, right = total(tallies), tallies[""]
    assert errors.labels >= 30
    assert errors.flagged >= 0.85 * errors.labels
    assert right.disputed <= 0.08 * right.labels


def test_what_is_spoilt_is_wrong() -> None:
    for seed in range(3000, 3030):
        case, labels = labelled(seed)
        for label in labels:
            if label.error in ("swapped overlap pair", "neighbour in the 3d ladder", "loss peak named"):
                assert label.text not in case.truth
            elif not label.error:
                assert abs(label.energy_ev - case.strongest_ev[label.element]) < 4.0
