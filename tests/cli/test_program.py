"""The program from outside: exit codes, streams, formats. Codes and keys are those of the README; energies of lines
are handbook practice, from memory.
"""

from __future__ import annotations

import csv
import io
import json
import os
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest

from tests.program import Run, one_error_line

ROOT = Path(__file__).resolve().parents[2]
DEMO = ROOT / "demo_spectra"
PLATINUM = ROOT / "tests" / "data" / "pt111_derivative.vms"


def flat_file(path: Path, *, seed: int = 5) -> Path:
    """Counting noise on a smooth background, and nothing else."""
    energy = np.arange(100.0, 800.0, 1.0)
    counts = np.random.default_rng(seed).poisson(4000.0 * (energy / 100.0) ** 0.3)
    path.write_text("\n".join(f"{e:.1f},{c}" for e, c in zip(energy, counts, strict=True)), encoding="utf-8")
    return path


@pytest.mark.parametrize(("energy", "element"), [(651, "Fe"), (1396, "Al"), (418, "Ti"), (920, "Cu"), (272, "C")])
def test_at_ranks_the_element_known_for_that_line_first(run: Run, energy: int, element: str) -> None:
    code, out, _ = run("at", "--format", "json", energy)
    answer = json.loads(out)
    assert code == 0
    assert answer["energy_ev"] == energy
    assert answer["candidates"][0]["element"] == element
    wanted = {"element", "transition", "expected_ev", "sigma_ev", "deviation_ev", "relative_height", "weight", "needs"}
    assert set(answer["candidates"][0]) == wanted | {"reasons"}


def test_one_energy_out_of_the_tables_does_not_silence_the_others(run: Run) -> None:
    code, out, err = run("at", "--format", "json", 651, 99999)
    assert code == 1
    assert [json.loads(line)["energy_ev"] for line in out.splitlines()] == [651]
    assert "99999" in one_error_line(err)


def test_no_shift_beyond_chemistry_makes_a_candidate(run: Run) -> None:
    """The largest shifts known are some 25 eV (oxidised phosphorus, from memory); nothing stands at 2800 eV."""
    assert json.loads(run("at", "--format", "json", 2800)[1])["candidates"] == []
    for energy in (70, 92, 381, 651, 1396):
        candidates = json.loads(run("at", "--format", "json", energy)[1])["candidates"]
        assert all(abs(candidate["deviation_ev"]) < 45.0 for candidate in candidates)


def test_iron_at_651_must_then_show_703_and_598(run: Run) -> None:
    needs = json.loads(run("at", "--format", "json", 651)[1])["candidates"][0]["needs"]
    for line in (703.0, 598.0):
        assert any(abs(need["energy_ev"] - line) < 5.0 for need in needs)


def test_at_several_energies_answers_each(run: Run) -> None:
    code, out, _ = run("at", "--format", "json", 651, 1396)
    assert code == 0
    assert [json.loads(line)["energy_ev"] for line in out.splitlines()] == [651, 1396]


@pytest.mark.parametrize("energy", ["-5", "99999", "nan", "651eV"])
def test_at_refuses_what_is_no_energy_in_one_line(run: Run, energy: str) -> None:
    code, out, err = run("at", "--", energy)
    assert code == 2
    assert not out
    assert one_error_line(err)


def test_element_forgives_misspelling(run: Run) -> None:
    code, out, _ = run("element", "titanum", "--format", "json")
    card = json.loads(out)
    assert code == 0
    assert card["element"] == "Ti"
    assert abs(card["deciding"]["energy_ev"] - 418.0) < 3.0


def test_aluminium_is_decided_by_its_line_at_1396(run: Run) -> None:
    """Common practice, no source: its low line at 68 eV is shared with many."""
    card = json.loads(run("element", "Al", "--format", "json")[1])
    assert abs(card["deciding"]["energy_ev"] - 1396.0) < 4.0


def test_hydrogen_and_helium_have_a_card_without_lines(run: Run) -> None:
    for name in ("hydrogen", "He"):
        code, out, _ = run("element", name)
        assert code == 0
        assert "too few electrons" in out


def test_unknown_element_is_one_line_and_the_others_are_answered(run: Run) -> None:
    code, out, err = run("element", "qqqqqq", "iron")
    assert code == 1
    assert "Fe" in out
    assert "qqqqqq" in one_error_line(err)


def test_minima_has_the_keys_promised(run: Run) -> None:
    code, out, _ = run("minima", "--format", "json", PLATINUM)
    answer = json.loads(out)
    assert code == 0
    assert set(answer["minima"][0]) >= {"energy_ev", "sigma_ev", "depth", "peak_to_peak", "width_ev", "significance"}


def test_assign_names_platinum_and_its_spike(run: Run) -> None:
    """Platinum is stated by the author of the data; the spike is described there too (tests/data/README.md)."""
    code, out, _ = run("assign", "--format", "json", PLATINUM)
    answer = json.loads(out)
    assert code == 0
    assert answer["assignments"][0]["element"] == "Pt"
    assert any(abs(artefact["energy_ev"] - 1636.7) < 1.0 for artefact in answer["artefacts"])
    assert {"H", "He"} <= {item["element"] for item in answer["untestable"]}


def test_assign_finds_platinum_present_and_nothing_else_but_perhaps_oxygen(run: Run) -> None:
    """Platinum is stated by the author of the data; oxygen is a reading of the curve (tests/data/README.md)."""
    answer = json.loads(run("assign", "--format", "json", PLATINUM)[1])
    assert answer["assignments"][0]["verdict"] == "present"
    others = [a["element"] for a in answer["assignments"] if a["probability"] >= 0.5]
    assert set(others) <= {"Pt", "O"}


def test_rule_out_and_within_are_heeded(run: Run) -> None:
    answer = json.loads(run("assign", "--format", "json", "--rule-out", "platinum", "--within", "100:800", PLATINUM)[1])
    assert "Pt" not in {a["element"] for a in answer["assignments"]}
    assert answer["ranges_ev"][0][0] >= 100
    assert answer["ranges_ev"][-1][1] <= 800


def test_an_input_that_fails_does_not_stop_the_others(run: Run, tmp_path: Path) -> None:
    code, out, err = run("assign", "--quiet", "--format", "json", tmp_path / "none.csv", PLATINUM)
    assert code == 1
    assert json.loads(out)["spectrum"].endswith("pt111_derivative.vms")
    assert "none.csv" in one_error_line(err)


def test_nothing_above_the_noise_is_exit_3(run: Run, tmp_path: Path) -> None:
    code, out, _ = run("assign", "--quiet", flat_file(tmp_path / "flat.csv"))
    assert code == 3
    assert "Nothing stands above the noise" in out


@pytest.mark.parametrize(
    "words",
    [
        ("assign",),
        ("assign", "--kind", "sideways", "x"),
        ("assign", "--within", "9:1", "x"),
        ("assign", "--resolution", "good", "x"),
        ("assign", "--expect", "qqqqqq", "x"),
        ("assign", "--expect", "Co", "--rule-out", "Co", "x"),
        ("assign", "--expect", "He", "x"),
        ("assign", "--beam", "-3", "x"),
        ("nonsense",),
    ],
)
def test_wrong_usage_is_exit_2_and_one_line(run: Run, words: tuple[str, ...]) -> None:
    code, out, err = run(*words)
    assert code == 2
    assert not out
    assert one_error_line(err)


def test_standard_input_and_csv(tmp_path: Path) -> None:
    command = [sys.executable, "-m", "ident", "assign", "--format", "csv", "-"]
    with PLATINUM.open("rb") as stream:
        done = subprocess.run(command, stdin=stream, capture_output=True, text=True, check=True, cwd=ROOT)
    rows = list(csv.DictReader(io.StringIO(done.stdout)))
    assert rows[0]["element"] == "Pt"


def test_a_reader_that_leaves_early_is_no_error() -> None:
    command = f'"{sys.executable}" -m ident element iron copper silver gold --format csv | head -n 1'
    done = subprocess.run(command, shell=True, capture_output=True, text=True, check=True, cwd=ROOT)
    assert not done.stderr


def test_version_names_program_and_tables(run: Run) -> None:
    code, out, _ = run("--version")
    assert code == 0
    assert out.startswith("ident ")
    assert "tables" in out


def test_several_files_have_one_csv_header(run: Run) -> None:
    _, out, _ = run("assign", "--quiet", "--format", "csv", PLATINUM, PLATINUM)
    assert sum(line.startswith("spectrum,") for line in out.splitlines()) == 1


def test_windows_can_be_taken_apart(run: Run) -> None:
    _, out, _ = run("minima", "--quiet", "--separate", "--format", "json", DEMO / "terminal_windows.csv")
    assert len(out.splitlines()) == 5  # windows, says the README of the demo spectra


@pytest.mark.parametrize(("words", "wanted"), [("ident con", "contrast"), ("ident assign --spu", "--sputtered")])
def test_the_shell_completes_commands_and_options(words: str, wanted: str) -> None:
    place = str(len(words.split()) - 1)
    environment = {**os.environ, "COMP_WORDS": words, "COMP_CWORD": place, "_IDENT_COMPLETE": "bash_complete"}
    done = subprocess.run(
        [sys.executable, "-m", "ident"], env=environment, capture_output=True, text=True, check=False, timeout=60
    )
    assert wanted in done.stdout


def test_a_misspelt_name_is_read_and_said(run: Run) -> None:
    code, out, err = run("element", "titanum")
    assert code == 0
    assert "titanium" in out
    assert "'titanum' is read as titanium (Ti)" in err
    assert run("element", "titanium")[2] == ""
    assert "read as nickel (Ni)" in run("assign", "--expect", "nikel", PLATINUM)[2]
