"""The forward model does what it says, and the scoring counts as counted by hand."""

from __future__ import annotations

import numpy as np
import pytest

from .forward import KINDS, Case, make_case
from .plain_way import call_plainly, nearest_principal
from .published import published_lines
from .recording import Taken
from .scoring import calibration_error, calibration_table, score_case, summarise
from .seeds import DEMO_SEEDS, HELD_OUT_SEEDS, REPORTED_SEEDS, TUNING_SEEDS
from .shapes import Emission, Losses, attenuation, line_core, line_shape
from .truth import line_significance

NO_LOSSES = Losses(
    step=0,
    step_length_ev=100,
    tail=0,
    tail_length_ev=10,
    plasmon=0,
    plasmon_ev=15,
    satellite=0,
    satellite_ev=9,
)


def _line(element: str, peak_ev: float, height: float = 100.0, sigma_ev: float = 2.0) -> Emission:
    return Emission(
        element=element,
        name="KLL",
        peak_ev=peak_ev,
        sigma_ev=sigma_ev,
        sigma_low_ev=sigma_ev,
        height=height,
        losses=NO_LOSSES,
    )


def _significance(lines: list[Emission], noise: float = 10.0) -> dict[str, float]:
    energy = np.arange(200.0, 400.5, 0.5)
    shapes = np.array([line_shape(energy, line) for line in lines])
    cores = np.array([line_core(energy, line) for line in lines])
    taken = Taken(values=(), shapes=shapes, cores=cores, noise=np.full(energy.size, noise), notes=())
    found = line_significance((energy,), lines, taken)
    return {element: sigma for element, (sigma, _) in found.items()}


@pytest.mark.parametrize("kind", KINDS)
def test_the_same_seed_gives_the_same_numbers(kind: str) -> None:
    one, two, other = make_case(kind, 1), make_case(kind, 1), make_case(kind, 2)
    assert one.truth == two.truth
    for left, right in zip(one.spectrum.windows, two.spectrum.windows, strict=True):
        assert np.array_equal(left.intensity, right.intensity)
    assert not np.array_equal(one.spectrum.windows[0].intensity, other.spectrum.windows[0].intensity)


def test_unknown_kind_is_refused() -> None:
    with pytest.raises(ValueError, match="no such kind"):
        make_case("holidays", 1)


def test_seeds_for_tuning_reporting_and_holding_out_never_meet() -> None:
    ranges = [TUNING_SEEDS, REPORTED_SEEDS, HELD_OUT_SEEDS, DEMO_SEEDS]
    assert len(set().union(*ranges)) == sum(len(seeds) for seeds in ranges)


def test_every_published_element_has_a_strongest_line_of_height_one() -> None:
    # Handbook practice: heights are relative to the element's strongest line; four short lists lack theirs.
    short = {element for element, lines in published_lines().items() if lines[0].relative_height < 1.0}
    assert short == {"Nd", "Sm", "Ho", "Os"}
    assert not {"H", "He"} & set(published_lines())  # too few electrons for an Auger transition


def test_a_gaussian_line_alone_has_the_textbook_significance() -> None:
    # Matched filter (any text on detection): S/N = A / sigma_noise * sqrt(sum of squares of the shape), and
    # sum exp(-x^2/s^2) dx = s sqrt(pi); a cubic background takes a part of it, never adds.
    found = _significance([_line("C", 270.0, height=100.0)])["C"]
    full = 100.0 / 10.0 * np.sqrt(2.0 * np.sqrt(np.pi) / 0.5)
    assert 0.75 * full < found < full


def test_a_line_under_a_stronger_neighbour_counts_for_less() -> None:
    alone = _significance([_line("N", 380.0, height=60.0)])["N"]
    beside = _significance([_line("N", 380.0, height=60.0), _line("Ti", 300.0, height=900.0)])["N"]
    under = _significance([_line("N", 380.0, height=60.0), _line("Ti", 380.5, height=900.0)])["N"]
    assert beside == pytest.approx(alone, rel=0.01)
    assert under < 0.1 * alone


def test_a_neighbour_far_below_the_noise_imitates_nothing() -> None:
    alone = _significance([_line("N", 300.0)])["N"]
    assert _significance([_line("N", 300.0), _line("Ti", 300.5, height=0.05)])["N"] == pytest.approx(alone, rel=0.01)


def test_a_film_takes_more_from_low_energies() -> None:
    # Seah and Dench (1979), elements: about 0.45 nm at 70 eV, 1.6 nm at 1 keV in monolayers of 0.25 nm.
    low, high = attenuation(70.0, 1.0, cosine=1.0), attenuation(1000.0, 1.0, cosine=1.0)
    assert float(high) == pytest.approx(np.exp(-1.0 / 1.62), rel=0.03)
    assert low < high


@pytest.mark.parametrize("kind", KINDS[:-1])
def test_cases_span_what_the_sets_promise(kind: str) -> None:
    cases = [make_case(kind, seed) for seed in range(40)]
    modes = {case.notes[0] for case in cases}
    assert modes == {"direct", "modulated", "difference"}
    assert any(case.unscored for case in cases)
    assert np.mean([len(case.must) for case in cases]) > 2.0
    assert all(np.all(np.isfinite(w.intensity)) for case in cases for w in case.spectrum.windows)


def _case(must: dict[str, float]) -> Case:
    base = make_case("background", 0)
    return Case(
        spectrum=base.spectrum,
        truth=dict.fromkeys(must, 0.5),
        significance=must,
        strongest_ev={},
        kind="surveys",
        seed=0,
        recipe="by hand",
    )


def test_scores_as_counted_by_hand() -> None:
    # Fe and C must be called, N is there but weak; called are Fe, N (not scored), Ag (false); C is missed.
    score = score_case(_case({"Fe": 50.0, "C": 9.0, "N": 4.0}), {"Fe": 0.99, "N": 0.7, "Ag": 0.97, "C": 0.3})
    assert [set(part) for part in (score.right, score.false, score.missed)] == [{"Fe"}, {"Ag"}, {"C"}]
    assert score.f1 == pytest.approx(0.5)  # 2 * 1 / (2 * 1 + 1 + 1)
    assert score.confident_false == (("Ag", 0.97),)
    assert not score.all_right
    perfect = score_case(_case({"Fe": 50.0}), {"Fe": 0.9})
    summary = summarise([score, perfect])
    assert summary.f1_mean == pytest.approx(0.75)
    assert summary.f1_pooled == pytest.approx(2 * 2 / (2 * 2 + 2))
    assert summary.all_right == pytest.approx(0.5)


def test_nothing_to_call_and_nothing_called_is_no_score() -> None:
    assert score_case(_case({"N": 4.0}), {"Fe": 0.4}).f1 is None
    assert score_case(_case({"N": 4.0}), {"Fe": 0.6}).f1 == 0.0


def test_calibration_as_counted_by_hand() -> None:
    judged = [(0.2, False)] * 4 + [(0.2, True)] + [(0.8, True)] * 4 + [(0.8, False)]
    assert calibration_error(judged, bins=2) == pytest.approx(0.0)
    assert [part.present for part in calibration_table(judged, bins=2)] == pytest.approx([0.2, 0.8])
    assert calibration_error([(1.0, False)] * 5, bins=2) == pytest.approx(1.0)


def test_the_plain_way_reads_the_nearest_principal_line() -> None:
    # Handbook practice, from memory: Fe 703, Cr 529, Ni 848; nothing principal near 1250.
    assert [nearest_principal(energy) for energy in (702.0, 529.5, 847.0, 1250.0)] == ["Fe", "Cr", "Ni", None]


def test_the_plain_way_finds_something_on_an_easy_survey() -> None:
    cases = [make_case("surveys", seed) for seed in range(20)]
    assert sum(len(case.must & set(call_plainly(case.spectrum))) for case in cases) > 10
