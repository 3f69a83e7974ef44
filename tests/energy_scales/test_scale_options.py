"""`ident at` and `ident element` with energies read in other ways."""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest

from ident import tables
from ident.errors import SettingError
from ident.lookup import EnergyScale, candidates_at, element_card
from ident.physics.scales import absolute_from_stated, stated_from_absolute


def ident(*words: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run([sys.executable, "-m", "ident", *words], capture_output=True, text=True, check=False)


def answer(*words: str) -> dict[str, Any]:
    done = ident(*words, "--format", "json")
    assert done.returncode == 0, done.stderr
    read: dict[str, Any] = json.loads(done.stdout)
    return read


@pytest.mark.parametrize(
    ("energy", "element", "transition"),
    [(918.6, "Cu", "L3M45M45"), (1393.0, "Al", "KL23L23"), (2015.8, "Au", "M5N67N67"), (846.2, "Ni", "L3VV")],
)
def test_published_direct_maxima_find_their_line(energy: float, element: str, transition: str) -> None:
    """Direct, Fermi-referenced: Al read (doi 10.1002/sia.1316, as cited), the others from memory."""
    best = answer("at", "--reference", "fermi", "--kind", "direct", str(energy))["candidates"][0]
    assert (best["element"], best["transition"]) == (element, transition)
    assert abs(best["deviation_ev"]) < 2.5 * 0.95  # the handbooks' scatter about the fitted term


@pytest.mark.parametrize(
    ("words", "energy"), [(["--reference", "vacuum"], 916.3), (["--reference", "vacuum", "--kind", "direct"], 914.1)]
)
def test_copper_on_the_vacuum_level(words: list[str], energy: float) -> None:
    """914.1 is 918.6 - 4.500 (IUPAC 2020); the minimum at 0.5 % stands half a width (2.2 eV) above it."""
    found = answer("at", *words, str(energy))
    assert found["reference"] == "vacuum"
    assert found["candidates"][0]["element"] == "Cu"
    assert abs(found["candidates"][0]["deviation_ev"]) < 1.0


def test_every_expectation_is_on_the_same_scale() -> None:
    """What must then be seen moves with the work function too: by 1 eV for all lines alike."""
    low = answer("at", "--reference", "vacuum", "--work-function", "4", "647")
    high = answer("at", "--reference", "vacuum", "--work-function", "5", "647")
    first = {c["element"]: c for c in low["candidates"]}["Fe"]
    second = {c["element"]: c for c in high["candidates"]}["Fe"]
    assert first["expected_ev"] - second["expected_ev"] == pytest.approx(1.0, abs=0.01)
    assert len(first["needs"]) >= 2
    for one, other in zip(first["needs"], second["needs"], strict=True):
        assert one["energy_ev"] - other["energy_ev"] == pytest.approx(1.0, abs=0.01)


def test_absolute_energies_are_those_of_the_table() -> None:
    table = {line.transition: line.energy_ev for line in tables.lines_of("Ti")}
    card = answer("element", "--reference", "absolute", "Ti")
    assert (card["reference"], card["kind"]) == ("absolute", "derivative")
    for line in card["lines"]:
        assert line["energy_ev"] == pytest.approx(table[line["transition"]], abs=0.01)


def test_broadening_moves_expected_minima_up() -> None:
    sharp = answer("element", "--resolution", "0.1%", "Al")["lines"]
    broad = answer("element", "--resolution", "1.2%", "--modulation", "6", "Al")["lines"]
    assert all(b["energy_ev"] > s["energy_ev"] for b, s in zip(broad, sharp, strict=True))


def test_levels_other_than_the_handbooks_carry_the_error_of_the_fitted_term() -> None:
    """Handbook rows enter through that term; it is known to 0.25 eV in the middle of the anchors."""
    handbook = element_card("Cu").lines[0].sigma_ev
    fermi = element_card("Cu", scale=EnergyScale(reference="fermi")).lines[0].sigma_ev
    assert (fermi**2 - handbook**2) ** 0.5 == pytest.approx(0.25, abs=0.05)


def test_the_default_is_the_scale_analysts_know() -> None:
    """Handbook practice, from memory: Ti 418 and 387, Fe 651, Al 1396 eV."""
    for energy, element in ((418.0, "Ti"), (651.0, "Fe"), (1396.0, "Al")):
        best = candidates_at(energy)[0]
        assert best.element == element
        assert best.expected_ev == pytest.approx(energy, abs=0.1)


@pytest.mark.parametrize(
    "words",
    [
        ["--reference", "moon"],
        ["--kind", "sideways"],
        ["--resolution", "sharp"],
        ["--resolution", "90%"],
        ["--work-function", "-3"],
        ["--modulation", "nan"],
        ["--separation", "1e9"],
    ],
)
@pytest.mark.parametrize("command", [["at", "651"], ["element", "Fe"]])
def test_impossible_options_are_one_line(command: list[str], words: list[str]) -> None:
    done = ident(*command, *words)
    assert done.returncode == 2
    assert not done.stdout
    assert len(done.stderr.splitlines()) == 1


def test_impossible_settings_of_the_library() -> None:
    with pytest.raises(SettingError):
        candidates_at(651.0, scale=EnergyScale(modulation_ev=-1.0))


def test_the_worked_example_of_the_readme() -> None:
    """Al KL23L23, direct, 1393.0 eV above the Fermi level (doi 10.1002/sia.1316, as cited), worked by hand.

    (3.5^2 + 6.965^2)^0.5 / 2.3548 = 3.31; less 4.500 (IUPAC 2020); (1396.31 - 3.62) / (1 - 2.91e-3) = 1396.76;
    with 1.5 eV of modulation added in quadrature 3.63.
    """
    text = " ".join((Path(__file__).resolve().parents[2] / "README.md").read_text(encoding="utf-8").split())
    absolute = absolute_from_stated(1393.0, 3.5, EnergyScale(reference="fermi", kind="direct"))
    worked = {"fermi": 1396.31, "vacuum": 1391.81, "handbook": 1396.76}
    for reference, energy in worked.items():
        stated = stated_from_absolute(absolute, 3.5, EnergyScale(reference=reference))  # type: ignore[arg-type]
        assert stated == pytest.approx(energy, abs=0.02)
        assert f"{energy:.1f} eV" in text
    modulated = EnergyScale(reference="fermi", modulation_ev=6.0)
    assert stated_from_absolute(absolute, 3.5, modulated) - 1393.0 == pytest.approx(3.63, abs=0.02)
    assert "another 0.3 eV" in text
