"""Why not this one? An element that was asked about gets reasons, whatever the answer."""

from __future__ import annotations

from pathlib import Path

import pytest

from ident import identify, read_spectrum
from ident.identification import Identification, WhyNot

DEMO = Path(__file__).parents[2] / "demo_spectra"


@pytest.fixture(scope="module")
def answer() -> Identification:
    spectrum = read_spectrum(DEMO / "slip_ring_dead.csv").crop(100.0, 1000.0)
    return identify(spectrum, why_not=("Fe", "ruthenium", "He", "Ag", "Mg"), rule_out=("Mg",))


def _asked(answer: Identification, element: str) -> WhyNot:
    return next(item for item in answer.why_not if item.element == element)


def test_every_element_asked_about_is_answered_in_order(answer: Identification) -> None:
    assert [item.element for item in answer.why_not] == ["Fe", "Ru", "He", "Ag", "Mg"]
    assert all(item.reasons for item in answer.why_not)


def test_iron_has_no_minimum_near_its_line(answer: Identification) -> None:
    # Fe L3VV stands at 703 eV in the handbooks; nothing was put there (demo_spectra/README.md).
    codes = {reason.code: reason.text for reason in _asked(answer, "Fe").reasons}
    assert "70" in codes["nothing-near"]
    assert "at%" in codes["below-limit"]


def test_ruthenium_is_spoken_against_by_the_lines_it_lacks(answer: Identification) -> None:
    # Ru has 273, but also 231 eV (handbook minima, from memory), where nothing stands.
    missing = [reason for reason in _asked(answer, "Ru").reasons if reason.code == "line-missing"]
    assert missing
    assert missing[0].side == "against"
    assert "23" in missing[0].text


def test_helium_and_what_was_ruled_out_are_not_weighed(answer: Identification) -> None:
    assert [reason.code for reason in _asked(answer, "He").reasons] == ["no-auger-line"]
    assert [reason.code for reason in _asked(answer, "Mg").reasons] == ["ruled-out"]


def test_asking_changes_no_judgement(answer: Identification) -> None:
    spectrum = read_spectrum(DEMO / "slip_ring_dead.csv").crop(100.0, 1000.0)
    plain = identify(spectrum, rule_out=("Mg",))
    assert plain.assignments == answer.assignments
    assert plain.why_not == ()
