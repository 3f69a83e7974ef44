"""The scan that an answer asks for tells what it says it will (truth: what was put into the forward model)."""

from __future__ import annotations

import numpy as np
import pytest

from .seeds import TUNING_SEEDS
from .settling import log_loss, settle

SEEDS = TUNING_SEEDS[2000:2040]


@pytest.mark.slow
def test_scans_asked_for_settle_what_was_open() -> None:
    found = [one for seed in SEEDS for one in settle(seed)]
    assert len(found) >= 5
    assert np.mean([one.right for one in found]) >= 0.75
    assert log_loss(found, after=True) < log_loss(found, after=False)
    assert all(0.05 <= one.dwell <= 50.0 for one in found)
