"""Verdicts on labels whose truth is known: spectra of the forward model, and platinum as its author states it."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from ident import Spectrum, identify, read_spectrum, recheck
from ident.rechecking import Recheck
from tests.benchmarks.overlaps import overlap_case

ROOT = Path(__file__).resolve().parents[2]
PLATINUM = ROOT / "tests" / "data" / "pt111_derivative.vms"
VERDICTS = {"agrees", "disagrees", "undecided", "impossible", "unreadable"}


@pytest.fixture(scope="module")
def steel() -> Spectrum:
    """Iron under carbon and oxygen, axis a few eV off."""
    return overlap_case("F", "Fe", with_guest=False, with_host=True, seed=600_001).spectrum


@pytest.fixture(scope="module")
def places() -> dict[str, float]:
    return overlap_case("F", "Fe", with_guest=False, with_host=True, seed=600_001).strongest_ev


def only(answer: Recheck) -> str:
    (label,) = answer.labels
    return label.verdict


def test_right_labels_agree(steel: Spectrum, places: dict[str, float]) -> None:
    # Truth: what was put into the forward model.
    answer = recheck(steel, [(places["Fe"], "Fe LMM"), (places["C"], "carbon"), (places["O"], "O KLL"), "iron"])
    assert [label.verdict for label in answer.labels] == ["agrees"] * 4
    assert not answer.missed
    assert all(label.better == () for label in answer.labels)
    assert answer.labels[0].reasons[0].code == "label-fits"


def test_the_overlapping_rival_is_disputed_and_the_better_one_named(steel: Spectrum) -> None:
    # F KLL near 647 eV stands under Fe near 651 eV: handbook practice, from memory; fluorine was not put in.
    iron_line = next(a for a in identify(steel).assignments if a.element == "Fe")
    near_651 = min((x.found_ev for x in iron_line.lines if x.found_ev), key=lambda found: abs(found - 651.0))
    label = recheck(steel, [(near_651, "F KLL")]).labels[0]
    assert label.verdict == "disagrees"
    assert label.better[0] == "Fe"
    assert "another-explains" in {reason.code for reason in label.reasons}


def test_a_neighbour_in_the_3d_series_is_disputed(steel: Spectrum, places: dict[str, float]) -> None:
    for name in ("Mn", "Co"):
        label = recheck(steel, [(places["Fe"], name)]).labels[0]
        assert label.verdict in ("disagrees", "impossible")
        assert label.better[0] == "Fe"


def test_a_label_far_off_its_line_is_disputed_and_told_where_it_is(steel: Spectrum, places: dict[str, float]) -> None:
    label = recheck(steel, [(places["O"] + 18.0, "O")]).labels[0]
    assert label.verdict == "disagrees"
    assert label.reasons[0].code == "energy-off"


def test_a_loss_below_a_strong_line_is_no_element(steel: Spectrum, places: dict[str, float]) -> None:
    """Bulk plasmon losses lie 15 to 25 eV below a line: textbook values, from memory. Nothing else was put there."""
    # 20 eV below Fe near 703 eV no handbook has a strong line; praseodymium has one near 699 eV (from memory)
    label = recheck(steel, [(places["Fe"] - 20.0, "Pr")]).labels[0]
    assert label.verdict in ("disagrees", "impossible")
    assert {"loss-of-strong-line", "nothing-there", "another-explains"} & {reason.code for reason in label.reasons}


@pytest.mark.parametrize(
    ("label", "code"),
    [
        ("hydrogen", "no-auger-line"),
        ((500.0, "He"), "no-auger-line"),
        ((5000.0, "Fe"), "label-out-of-range"),
        ((272.0, "Fe"), "no-line-near"),
    ],
)
def test_impossible_labels(steel: Spectrum, label: object, code: str) -> None:
    # Hydrogen and helium have one shell only; iron has no line between 60 and 500 eV (handbook practice).
    found = recheck(steel, [label]).labels[0]
    assert found.verdict == "impossible"
    assert found.reasons[0].code == code


def test_an_element_whose_lines_were_not_scanned_cannot_be_labelled(steel: Spectrum) -> None:
    # Lithium's only line stands near 43 eV: handbook practice, from memory.
    found = recheck(steel.crop(200.0, 800.0), ["Li"]).labels[0]
    assert found.verdict == "impossible"
    assert found.reasons[0].code == "label-out-of-range"


def test_a_vacancy_in_another_shell_is_not_this_line(steel: Spectrum, places: dict[str, float]) -> None:
    # Oxygen's only Auger lines start from K.
    label = recheck(steel, [(places["O"], "O LMM")]).labels[0]
    assert label.verdict == "disagrees"
    assert label.reasons[0].code == "other-transition"


def test_what_no_label_names_is_missed(steel: Spectrum, places: dict[str, float]) -> None:
    answer = recheck(steel, [(places["C"], "C")])
    assert {item.element for item in answer.missed} >= {"Fe", "O"}
    for item in answer.missed:
        assert item.probability >= 0.5
        assert abs((item.energy_ev or 0.0) - places[item.element]) < 60.0


def test_capitals_are_read_by_energy_by_company_or_not_at_all(steel: Spectrum, places: dict[str, float]) -> None:
    assert recheck(steel, ["CO"]).labels[0].verdict == "unreadable"
    assert set(recheck(steel, ["CO"]).labels[0].choices) == {"Co", "C", "O"}
    assert recheck(steel, ["CO", "FE"]).labels[0].elements == ("Co",)  # somebody who writes in capitals
    by_energy = recheck(steel, [(places["C"], "CO")]).labels[0]
    assert by_energy.elements == ("C", "O")
    assert "label-unclear" in {reason.code for reason in by_energy.reasons}  # and is told


def test_unclear_names_are_unreadable_with_choices(steel: Spectrum) -> None:
    label = recheck(steel, ["irom"]).labels[0]
    assert (label.verdict, label.read_as) == ("unreadable", None)
    assert "Fe" in label.choices
    assert "iron (Fe)" in label.reasons[0].text


def test_a_correction_is_shown(steel: Spectrum, places: dict[str, float]) -> None:
    label = recheck(steel, [(places["O"], "oxigen")]).labels[0]
    assert (label.verdict, label.read_as) == ("agrees", "O")
    assert "name-corrected" in {reason.code for reason in label.reasons}


def test_of_several_elements_the_worst_counts_and_with_or_the_best(steel: Spectrum, places: dict[str, float]) -> None:
    assert only(recheck(steel, [(places["Fe"], "Fe/Co")])) != "agrees"
    assert only(recheck(steel, [(places["Fe"], "Fe or Co")])) == "agrees"


def test_the_labels_never_influence_the_opinion(steel: Spectrum) -> None:
    plain = {a.element: a.probability for a in identify(steel).assignments}
    wild = recheck(steel, [(510.0, "Sb"), "U", (651.0, "F"), "Mn", "Co"]).opinion
    assert {a.element: a.probability for a in wild.assignments} == plain
    assert wild.settings == identify(steel).settings


def test_the_order_of_labels_changes_no_verdict(steel: Spectrum, places: dict[str, float]) -> None:
    labels = [(places["Fe"], "Fe"), (647.0, "F"), "Co", (places["C"], "C"), (120.0, "P"), "xyz"]
    forth = {label.label: label.verdict for label in recheck(steel, labels).labels}
    back = {label.label: label.verdict for label in recheck(steel, labels[::-1]).labels}
    assert forth == back


def test_shifting_axis_and_labels_together_changes_no_verdict(steel: Spectrum, places: dict[str, float]) -> None:
    window = steel.windows[0]
    moved = Spectrum.from_arrays(window.energy_ev + 1.5, window.intensity)
    labels = [(places["Fe"], "Fe"), (places["C"], "C"), (places["O"] + 20.0, "O"), (places["Fe"], "Co")]
    there = [(energy + 1.5, text) for energy, text in labels]
    before = [label.verdict for label in recheck(steel, labels).labels]
    assert [label.verdict for label in recheck(moved, there).labels] == before


def test_energies_of_the_tables_are_understood_on_a_charging_sample() -> None:
    # The bead charges by about 21 eV (demo_spectra/README.md); 272, 293, 503 and 990 eV are handbook practice.
    spectrum = read_spectrum(ROOT / "demo_spectra" / "feedthrough_bead.vms")
    answer = recheck(spectrum, [(272, "C"), (293, "Ca"), (505, "O"), (990, "Na")], insulator=True)
    assert [label.verdict for label in answer.labels] == ["agrees"] * 4
    assert any("those of the tables" in text for text in answer.warnings)


def test_platinum_as_its_author_states_it() -> None:
    # The author of the data states platinum (tests/data/README.md); Pt M5N67N67 stands near 1967 eV in handbooks.
    spectrum = read_spectrum(PLATINUM)
    answer = recheck(spectrum, ["Pt", "Au", "H"])
    assert answer.labels[0].verdict == "agrees"
    assert answer.labels[1].verdict in ("disagrees", "undecided")
    assert answer.labels[2].verdict == "impossible"


def test_nothing_above_the_noise_supports_no_label() -> None:
    energy = np.arange(100.0, 800.0)
    counts = np.random.default_rng(5).poisson(4000.0 * (energy / 100.0) ** 0.3).astype(float)
    answer = recheck(Spectrum.from_arrays(energy, counts), [(510.0, "O"), (703.0, "Fe"), "C"])
    assert "agrees" not in {label.verdict for label in answer.labels}
    assert answer.missed == ()


def test_records_frame_and_dict(steel: Spectrum) -> None:
    answer = recheck(steel, [(651.0, "F"), "O", "?"])
    plain = answer.to_dict()
    assert {"spectrum", "labels", "missed"} <= set(plain)
    keys = {"energy_ev", "label", "read_as", "verdict", "better", "reasons"}
    assert all(keys <= set(label) for label in plain["labels"])
    assert plain["labels"][1]["energy_ev"] is None
    assert "opinion" not in plain
    assert list(answer.to_frame()["label"]) == ["F", "O", "?"]
    assert sum(answer.counts.values()) == 3
    assert set(answer.counts) == VERDICTS
