"""What must not change a judgement: where the axis starts, the unit of the ordinate, the order of the candidates."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import fields, replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from ident import read_spectrum
from ident.matching import Settings, weigh
from ident.matching import problem as problem_module
from ident.minima import analyse
from ident.patterns import Patterns, all_patterns
from ident.spectrum import Spectrum, Window

DEMO = Path(__file__).parents[2] / "demo_spectra"
FILES = ("slip_ring_dead.csv", "valve_stem_coated.csv", "connector_pin_derivative.txt", "housing_cover.txt")
few = settings(max_examples=4, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])


def probabilities(spectrum: Spectrum, **choices: Any) -> dict[str, float]:
    evidence = weigh(analyse(spectrum), Settings(**choices))
    return {element.element: element.probability for element in evidence.elements}


def changed(spectrum: Spectrum, change: Callable[[Window], Window]) -> Spectrum:
    return replace(spectrum, windows=tuple(change(window) for window in spectrum.windows))


def assert_same_calls(before: dict[str, float], after: dict[str, float]) -> None:
    """What was likely stays likely, and nothing becomes so that was not nearly."""
    assert not {e for e, p in before.items() if p >= 0.8} - {e for e, p in after.items() if p >= 0.5}
    assert not {e for e, p in after.items() if p >= 0.5} - {e for e, p in before.items() if p >= 0.2}


@pytest.mark.parametrize("file", FILES[::3])
@given(factor=st.floats(1e-3, 1e3))
@few
def test_the_unit_of_the_ordinate_does_not_matter(file: str, factor: float) -> None:
    # A constant factor carries no news of any element; common practice, no source.
    spectrum = read_spectrum(DEMO / file)
    scaled = changed(spectrum, lambda window: replace(window, intensity=window.intensity * factor))
    first = changed(spectrum, lambda window: replace(window, intensity=window.intensity * 1.5))
    assert_same_calls(probabilities(first), probabilities(scaled))


@pytest.mark.parametrize("file", FILES[::3])
@given(shift_ev=st.floats(-0.8, 0.8))
@few
def test_a_shifted_axis_shifts_the_minima_and_changes_no_call(file: str, shift_ev: float) -> None:
    # Axes are off by electronvolts; by how much is the prior's business alone.
    spectrum = read_spectrum(DEMO / file)
    moved = changed(spectrum, lambda window: replace(window, energy_ev=window.energy_ev + shift_ev))
    strong = [m for m in analyse(spectrum).minima if m.significance > 20]
    found = np.array([m.energy_ev for m in analyse(moved).minima])
    for minimum in strong:
        assert np.min(np.abs(found - minimum.energy_ev - shift_ev)) < 0.5
    assert_same_calls(probabilities(spectrum), probabilities(moved))


@pytest.mark.parametrize("file", FILES)
def test_the_order_of_the_candidates_does_not_matter(file: str, monkeypatch: pytest.MonkeyPatch) -> None:
    # A judgement that depended on the order of a table would be none.
    spectrum = read_spectrum(DEMO / file)
    before = probabilities(spectrum)
    shuffled = _reordered(all_patterns(), np.random.default_rng(7).permutation(len(all_patterns().symbols)))
    monkeypatch.setattr(problem_module, "all_patterns", lambda: shuffled)
    after = probabilities(spectrum)
    assert before.keys() == after.keys()
    assert all(abs(before[element] - after[element]) < 1e-6 for element in before)


def _reordered(patterns: Patterns, order: np.ndarray) -> Patterns:
    parts: dict[str, object] = {}
    for field in fields(patterns):
        value = getattr(patterns, field.name)
        parts[field.name] = value[order] if isinstance(value, np.ndarray) else tuple(value[i] for i in order)
    place = np.append(np.argsort(order), -1)  # where each element went; -1 stays "none"
    return Patterns(**{**parts, "state_partner": place[patterns.state_partner[order]]})


@pytest.mark.parametrize("file", FILES)
def test_what_was_measured_is_never_altered(file: str) -> None:
    spectrum = read_spectrum(DEMO / file)
    before = [(window.energy_ev.copy(), window.intensity.copy()) for window in spectrum.windows]
    probabilities(spectrum)
    for window, (energy, intensity) in zip(spectrum.windows, before, strict=True):
        assert np.array_equal(window.energy_ev, energy)
        assert np.array_equal(window.intensity, intensity)


def test_the_same_spectrum_gets_the_same_answer_twice() -> None:
    spectrum = read_spectrum(DEMO / FILES[0])
    assert probabilities(spectrum) == probabilities(spectrum)


def test_what_is_ruled_out_is_never_named_and_what_is_expected_never_loses() -> None:
    spectrum = read_spectrum(DEMO / "slip_ring_dead.csv")
    before = probabilities(spectrum)
    assert "S" not in probabilities(spectrum, rule_out=("S",))
    for element in ("S", "Cl", "Ni"):
        assert probabilities(spectrum, expect=(element,)).get(element, 0.0) >= before.get(element, 0.0) - 1e-3


def test_without_commonness_carbon_has_no_head_start() -> None:
    # Every element costs the same then: shipped as a switch, since on a sample made in vacuum carbon is no rule.
    spectrum = read_spectrum(DEMO / "valve_stem_coated.csv")
    problem = problem_module.pose(analyse(spectrum), Settings(commonness=False))
    assert len(set(problem.element_price.tolist())) == 1


def test_hydrogen_and_helium_have_no_lines() -> None:
    # An Auger transition takes three electrons, so the lightest element with one is lithium (textbooks).
    assert {"H", "He"}.isdisjoint(all_patterns().symbols)
    assert all_patterns().symbols[0] == "Li"
