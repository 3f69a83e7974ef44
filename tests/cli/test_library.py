"""The library from outside: arrays in, records out, errors of one family."""

from __future__ import annotations

import json

import numpy as np
import pytest

from ident import IdentError, Settings, Spectrum, candidates_at, element_card, identify
from ident.errors import SettingError, UnknownNameError


def line_of_carbon(*, step: float = 0.5, height: float = 4000.0, seed: int = 3) -> Spectrum:
    """Counts with one broad line whose derivative minimum stands near 272 eV: carbon (handbook, from memory)."""
    energy = np.arange(200.0, 330.0, step)
    counts = 20000.0 * (energy / 200.0) ** 0.2 + height * np.exp(-0.5 * ((energy - 268.0) / 3.5) ** 2)
    return Spectrum.from_arrays(energy, np.random.default_rng(seed).poisson(counts), name="carbon, made up")


def test_arrays_in_records_out_without_a_file() -> None:
    answer = identify(line_of_carbon())
    assert "C" in answer.called
    assert answer.spectrum == "carbon, made up"
    assert answer.sha256 is None
    json.dumps(answer.to_dict(), allow_nan=False)
    assert set(answer.to_frame()["element"]) == {a.element for a in answer.assignments}


def test_probabilities_fall_and_verdicts_follow() -> None:
    answer = identify(line_of_carbon())
    probabilities = [a.probability for a in answer.assignments]
    assert probabilities == sorted(probabilities, reverse=True)
    assert all(0.01 <= p <= 1.0 for p in probabilities)


def test_hydrogen_and_helium_are_never_assigned_and_always_untestable() -> None:
    answer = identify(line_of_carbon())
    assert not {"H", "He"} & {a.element for a in answer.assignments}
    why = {item.element: item.why for item in answer.untestable}
    assert why["H"] == why["He"] == "too few electrons for an Auger transition"


def test_input_arrays_are_not_altered() -> None:
    energy, counts = np.arange(100.0, 200.0), np.random.default_rng(1).poisson(900.0, 100).astype(float)
    before = energy.copy(), counts.copy()
    identify(Spectrum.from_arrays(energy, counts))
    assert np.array_equal(energy, before[0])
    assert np.array_equal(counts, before[1])


def test_what_is_ruled_out_is_not_assigned() -> None:
    answer = identify(line_of_carbon(), rule_out=["carbon"])
    assert "C" not in {a.element for a in answer.assignments}
    assert answer.settings["rule_out"] == ("C",)


@pytest.mark.parametrize(
    "settings",
    [
        {"beam_kev": 0.0},
        {"beam_kev": float("nan")},
        {"resolution": 0.5},
        {"resolution": 0.005, "resolution_ev": 1.0},
        {"expect": "C"},
        {"expect": ("H",)},
        {"expect": ("C",), "rule_out": ("carbon",)},
        {"no_such_setting": 1},
    ],
)
def test_settings_that_make_no_sense_are_refused(settings: dict[str, object]) -> None:
    with pytest.raises(SettingError) as refused:
        identify(line_of_carbon(), **settings)
    assert "\n" not in str(refused.value)


def test_names_in_settings_are_read_forgivingly() -> None:
    assert Settings(expect=("titanum", "fe")).expect == ("Ti", "Fe")
    with pytest.raises(UnknownNameError):
        Settings(expect=("qqqqqq",))


def test_errors_are_of_one_family() -> None:
    for question in (lambda: candidates_at(float("nan")), lambda: element_card("qqqqqq")):
        with pytest.raises(IdentError):
            question()


def test_candidates_are_ranked_and_their_weights_add_up() -> None:
    weights = [candidate.weight for candidate in candidates_at(510.0)]
    assert weights == sorted(weights, reverse=True)
    assert 0.9 < sum(weights) <= 1.0 + 1e-9  # the last few, of no weight, are left out
    assert candidates_at(510.0)[0].element == "O"  # handbook practice: O KLL between 503 and 510 eV, from memory


def test_reach_limits_the_candidates() -> None:
    assert all(abs(candidate.deviation_ev) <= 2.0 for candidate in candidates_at(651.0, within=2.0))
    assert len(candidates_at(651.0, within=2.0)) < len(candidates_at(651.0))


@pytest.mark.parametrize(
    ("element", "decides_ev"),
    [("Fe", 703.0), ("Cu", 920.0), ("Ti", 418.0), ("Al", 1396.0), ("Si", 1619.0), ("C", 272.0), ("O", 503.0)],
)
def test_deciding_lines_are_those_analysts_use(element: str, decides_ev: float) -> None:
    """Common practice, no source; energies from memory of the handbooks (O: 503 or 510), 0.5 % allowed."""
    card = element_card(element)
    assert card.deciding is not None
    assert abs(card.deciding.energy_ev - decides_ev) < max(3.0, 0.005 * decides_ev)


def test_titanium_and_nitrogen_are_named_as_each_others_rivals() -> None:
    """The overlap of N near 381 and Ti near 387 eV is the textbook one; common practice, no source."""
    rivals = {rival.element for line in element_card("N").lines for rival in line.rivals}
    assert "Ti" in rivals
    rivals = {rival.element for line in element_card("Ti").lines for rival in line.rivals}
    assert "N" in rivals


def test_cards_cite_their_sources() -> None:
    card = element_card("iron")
    cited = {key for line in card.lines for key in line.source.split()}
    assert cited <= {source.key for source in card.sources}
    assert all(source.text for source in card.sources)
