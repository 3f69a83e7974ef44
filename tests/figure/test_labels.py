"""Placing labels: numerics against an independent solver, and what must hold for any labels at all."""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import minimize

from ident.report.figure_labels import Label, fitting, interleaved, labels_of, spread

from .conftest import examined, invented

places = st.lists(st.tuples(st.floats(0.0, 100.0), st.floats(0.5, 8.0)), min_size=1, max_size=12)


@given(places)
@settings(deadline=None)
def test_labels_never_overlap_and_stay_in_order_and_inside(found: list[tuple[float, float]]) -> None:
    found = sorted(found)
    wanted, widths = [f[0] for f in found], [f[1] for f in found]
    centres = spread(wanted, widths, 0.0, 100.0)
    ends = [(c - 0.5 * w, c + 0.5 * w) for c, w in zip(centres, widths, strict=True)]
    assert ends[0][0] >= -1e-9
    assert ends[-1][1] <= 100.0 + 1e-9
    for left, right in pairwise(ends):
        assert left[1] <= right[0] + 1e-9


@pytest.mark.parametrize("seed", range(6))
def test_moves_are_the_least_that_keep_labels_apart(seed: int) -> None:
    """Against sequential quadratic programming of SciPy."""
    rng = np.random.default_rng(seed)
    wanted, widths = np.sort(rng.uniform(0.0, 60.0, 9)), rng.uniform(2.0, 6.0, 9)
    gaps = 0.5 * (widths[1:] + widths[:-1])
    limits = [{"type": "ineq", "fun": lambda x: np.diff(x) - gaps}]
    bounds = [(0.5 * w, 60.0 - 0.5 * w) for w in widths]
    start = np.linspace(3.0, 57.0, 9)
    best = minimize(lambda x: float(np.sum((x - wanted) ** 2)), start, constraints=limits, bounds=bounds, tol=1e-12)
    assert best.success
    centres = np.array(spread(list(wanted), list(widths), 0.0, 60.0))
    assert float(np.sum((centres - wanted) ** 2)) <= best.fun + 1e-4


def test_a_label_with_room_stands_at_its_minimum() -> None:
    assert spread([20.0, 50.0], [6.0, 6.0], 0.0, 100.0) == (20.0, 50.0)


def label(rank: float) -> Label:
    return Label(energy_ev=100.0, text=("Fe L3VV",), role="present", rank=rank)


def test_labels_of_the_lowest_rank_go_first() -> None:
    assert fitting([label(1.0), label(3.0), label(2.0)], [10.0, 10.0, 10.0], 25.0) == (1, 2)


def test_only_labels_that_reach_into_each_other_hang_together() -> None:
    assert interleaved([(0.0, 5.0), (4.0, 9.0), (10.0, 12.0), (11.0, 30.0), (29.0, 31.0)]) == ((0, 1), (2, 3, 4))


def test_an_element_nearly_as_likely_is_named_where_it_rests_on_a_claimed_minimum() -> None:
    base = examined("bracket_stain.csv").answer
    claims = (invented("Zn", 0.7, [990.0, 922.0]), invented("Cu", 0.45, [922.0]), invented("Na", 0.1, [990.0]))
    named = {label.energy_ev: label for label in labels_of(replace(base, assignments=claims, unexplained=()))}
    assert named[922.0].text == ("Zn M2N23N45", "or Cu M1N23N45?")
    assert named[990.0].text == ("Zn M1N23N45",)
    assert not named[922.0].shared
