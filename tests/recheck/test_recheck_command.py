"""`ident recheck` from outside: exit codes, streams, formats."""

from __future__ import annotations

import csv
import io
import json
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest

from tests.program import Run, one_error_line

ROOT = Path(__file__).resolve().parents[2]
SPECTRUM = ROOT / "demo_spectra" / "slip_ring_dead.csv"
LABELS = ROOT / "demo_spectra" / "slip_ring_dead_labels.csv"


def test_json_has_the_keys_promised_and_judges_the_demo_labels(run: Run) -> None:
    """What is wrong with these labels is said in demo_spectra/README.md."""
    code, out, _ = run("recheck", "--format", "json", SPECTRUM, LABELS)
    answer = json.loads(out)
    assert code == 0
    assert {"spectrum", "labels", "missed"} <= set(answer)
    said = {(label["label"], label["energy_ev"]): label["verdict"] for label in answer["labels"]}
    wrong = {("Co LMM", 776.0), ("Ni", 848.5), ("Cu LMM", 905.0), ("Na KLL", 990.0), ("Ti", 418.0)}
    assert {key for key, verdict in said.items() if verdict != "agrees"} == wrong
    assert [item["element"] for item in answer["missed"]] == ["Cl"]
    cobalt = next(label for label in answer["labels"] if label["label"] == "Co LMM")
    assert cobalt["better"] == ["Cu"]
    assert {"code", "side", "text"} == set(cobalt["reasons"][0])


def test_text_names_verdicts_corrections_and_what_is_missed(run: Run) -> None:
    code, out, _ = run("recheck", SPECTRUM, LABELS)
    assert code == 0
    assert "Co LMM at 776.0 eV: disagrees" in out
    assert "'Oxigen' was read as oxygen" in out
    assert "no label names Cl" in out
    assert max(len(line) for line in out.splitlines()) <= 120


def test_csv_has_one_header_and_a_row_a_label(run: Run) -> None:
    _, out, _ = run("recheck", "--quiet", "--format", "csv", SPECTRUM, LABELS)
    rows = list(csv.DictReader(io.StringIO(out)))
    assert sum(row["verdict"] == "missed" for row in rows) == 1
    assert len(rows) == 11  # ten labels, one element missed
    assert rows[0]["label"] == "S LVV"


def test_hostile_labels_are_shown_and_not_obeyed(run: Run, tmp_path: Path) -> None:
    labels = tmp_path / "labels.txt"
    labels.write_text("510\t=cmd()\n272\tC\x1b[31m\n703\t@SUM(A1)\n", encoding="utf-8")
    _, out, _ = run("recheck", "--quiet", SPECTRUM, labels)
    assert "\x1b" not in out
    rows = list(csv.DictReader(io.StringIO(run("recheck", "--quiet", "--format", "csv", SPECTRUM, labels)[1])))
    assert all(not row["label"].startswith(("=", "@")) for row in rows)


def test_labels_from_standard_input() -> None:
    command = [sys.executable, "-m", "ident", "recheck", "--format", "json", str(SPECTRUM), "-"]
    done = subprocess.run(command, input="920 Cu\n", capture_output=True, text=True, check=True, cwd=ROOT)
    assert json.loads(done.stdout)["labels"][0]["verdict"] == "agrees"


@pytest.mark.parametrize("content", ["", "# only a remark\n"])
def test_labels_that_cannot_be_read_are_exit_1_and_one_line(run: Run, tmp_path: Path, content: str) -> None:
    labels = tmp_path / "labels.csv"
    labels.write_text(content, encoding="utf-8")
    code, out, err = run("recheck", SPECTRUM, labels)
    assert code == 1
    assert not out
    assert "labels.csv" in one_error_line(err)


def test_a_spectrum_or_labels_that_are_not_there_are_exit_1(run: Run, tmp_path: Path) -> None:
    for words in ((tmp_path / "none.csv", LABELS), (SPECTRUM, tmp_path / "none.csv")):
        code, _, err = run("recheck", *words)
        assert code == 1
        assert "none.csv" in one_error_line(err)


@pytest.mark.parametrize("words", [(), (SPECTRUM,), ("-", "-"), ("--expect", "He", SPECTRUM, LABELS)])
def test_wrong_usage_is_exit_2(run: Run, words: tuple[object, ...]) -> None:
    code, out, err = run("recheck", *words)
    assert code == 2
    assert not out
    assert one_error_line(err)


def test_nothing_above_the_noise_is_exit_3(run: Run, tmp_path: Path) -> None:
    energy = np.arange(100.0, 800.0)
    counts = np.random.default_rng(5).poisson(4000.0 * (energy / 100.0) ** 0.3)
    flat = tmp_path / "flat.csv"
    flat.write_text("\n".join(f"{e:.1f},{c}" for e, c in zip(energy, counts, strict=True)), encoding="utf-8")
    labels = tmp_path / "labels.txt"
    labels.write_text("O\n", encoding="utf-8")
    assert run("recheck", "--quiet", flat, labels)[0] == 3
