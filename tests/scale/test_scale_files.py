"""Scale files and the command: round trip, refusals, exit codes (those of the README), and what others make of them."""

from __future__ import annotations

import csv
import io
import json
from dataclasses import replace
from pathlib import Path

import pytest

from ident import ScaleCalibration, Spectrum, calibrate_scale, load_scale, save_scale
from ident.errors import InputError, TableError
from ident.tables import ScaleLine, reference_folder
from ident.tables.files import read_rows
from tests.program import Run

from .metals import Axis, metal_spectrum

AXIS = Axis(offset_ev=-5.0, slope=0.002)


@pytest.fixture(scope="session")
def calibration() -> ScaleCalibration:
    return calibrate_scale({m: metal_spectrum(m, AXIS, 1) for m in ("Cu", "Au")}, date="2026-05-04")


def written(path: Path, spectrum: Spectrum) -> Path:
    window = spectrum.windows[0]
    rows = zip(window.energy_ev, window.intensity, strict=True)
    path.write_text("energy (eV),counts\n" + "".join(f"{e:.2f},{c:.0f}\n" for e, c in rows), encoding="utf-8")
    return path


def test_round_trip(calibration: ScaleCalibration, tmp_path: Path) -> None:
    save_scale(calibration, tmp_path / "scale.json")
    assert load_scale(tmp_path / "scale.json") == calibration
    plain = json.loads((tmp_path / "scale.json").read_text(encoding="utf-8"))
    assert plain["schema"] == 1
    assert plain["date"] == "2026-05-04"
    assert plain["metals"] == ["Cu", "Au"]


def test_every_key_of_a_scale_file_is_in_the_readme(calibration: ScaleCalibration) -> None:
    text = (Path(__file__).resolve().parents[2] / "README.md").read_text(encoding="utf-8")
    section = text.split("A scale file is JSON:")[1].split("\n\n")[0]
    for key in [*calibration.to_dict(), *calibration.to_dict()["lines"][0]]:
        assert key == "metal" or f"`{key}`" in section, key


DAMAGE = {
    "no JSON": (lambda text: text[:200], "no JSON"),
    "something else": (lambda text: '{"a": 1}', "no scale file"),
    "a list": (lambda text: "[1, 2]", "no scale file"),
    "another schema": (lambda text: text.replace('"schema": 1', '"schema": 7'), "schema 7"),
    "a key gone": (lambda text: text.replace('"slope_sigma"', '"slope_sigm"'), "slope_sigma"),
    "text for a number": (lambda text: text.replace('"slope": ', '"slope": "0.1", "was": '), "slope"),
    "text for a list": (lambda text: text.replace('"metals": ', '"metals": "Cu", "was": '), "metals"),
    "no number": (lambda text: text.replace('"chi2": ', '"chi2": NaN, "was": '), "chi2"),
    "out of the question": (lambda text: text.replace('"offset_ev": -', '"offset_ev": 700, "was": -'), "offset_ev"),
}


@pytest.mark.parametrize("what", DAMAGE)
def test_a_malformed_scale_file_is_refused_in_one_line(
    what: str, calibration: ScaleCalibration, tmp_path: Path, run: Run
) -> None:
    change, said = DAMAGE[what]
    path = tmp_path / "scale.json"
    save_scale(calibration, path)
    before = path.read_text(encoding="utf-8")
    path.write_text(change(before), encoding="utf-8")
    assert path.read_text(encoding="utf-8") != before
    with pytest.raises(InputError, match=said):
        load_scale(path)
    spectrum = written(tmp_path / "copper.csv", metal_spectrum("Cu", AXIS, 1))
    code, out, err = run("minima", "--scale", path, spectrum)
    assert (code, out) == (1, "")
    assert len(err.splitlines()) == 1
    assert str(path) in err


def test_a_covariance_that_is_none_is_refused(calibration: ScaleCalibration, tmp_path: Path) -> None:
    for rows in (((1.0, 2.0), (3.0, 1.0)), ((-1.0, 0.0), (0.0, 1.0)), ((1.0, 2.0), (2.0, 1.0))):
        save_scale(replace(calibration, covariance=rows), tmp_path / "scale.json")
        with pytest.raises(InputError, match="covariance"):
            load_scale(tmp_path / "scale.json")


def test_a_missing_scale_file_is_refused(tmp_path: Path) -> None:
    with pytest.raises(InputError, match="cannot be read"):
        load_scale(tmp_path / "none.json")


def test_scale_then_use_it(tmp_path: Path, run: Run) -> None:
    copper = written(tmp_path / "copper.csv", metal_spectrum("Cu", AXIS, 1))
    gold = written(tmp_path / "gold.csv", metal_spectrum("Au", AXIS, 1))
    saved = tmp_path / "scale.json"
    code, out, _ = run("scale", "--metal", f"Cu={copper}", "--metal", f"gold={gold}", "--save", saved)
    assert code == 0
    assert "Cu L3M45M45" in out
    assert "no claim of conformity" in out
    found = load_scale(saved)
    assert abs(found.offset_ev - AXIS.offset_ev) < 3.0 * found.offset_sigma_ev
    code, out, _ = run("minima", "--format", "json", "--scale", saved, copper)
    assert code == 0
    told = json.loads(out)
    # Cu L3M45M45 above the Fermi level: 918.6 eV, and 2.4 eV more for the minimum at 0.5 % (from memory)
    near = min(told["minima"], key=lambda m: abs(m["corrected_ev"] - 921.0))
    assert abs(near["corrected_ev"] - 921.0) < 1.0
    assert abs(near["energy_ev"] - AXIS.place(921.0)) < 1.0
    code, out, _ = run("minima", "--format", "csv", "--scale", saved, copper)
    rows = list(csv.DictReader(io.StringIO(out)))
    assert len(rows) == len(told["minima"])
    assert all(row["corrected_ev"] and row["corrected_sigma_ev"] for row in rows)
    code, out, _ = run("assign", "--format", "json", "--scale", saved, copper)
    assert json.loads(out)["scale"]["source"].startswith("calibrated with Cu, Au")


def test_without_a_scale_there_are_no_corrected_energies(tmp_path: Path, run: Run) -> None:
    copper = written(tmp_path / "copper.csv", metal_spectrum("Cu", AXIS, 1))
    _, out, _ = run("minima", "--format", "json", copper)
    assert "corrected_ev" not in out


def test_formats_of_the_command_agree(tmp_path: Path, run: Run) -> None:
    copper = written(tmp_path / "copper.csv", metal_spectrum("Cu", AXIS, 1))
    _, out, err = run("scale", "--metal", f"Cu={copper}", "--format", "json")
    told = json.loads(out)
    assert told["slope_from"] != "lines"
    assert "slope" in err
    _, out, err = run("scale", "--metal", f"Cu={copper}", "--format", "csv", "--quiet")
    rows = list(csv.DictReader(io.StringIO(out)))
    assert err == ""
    assert [row["transition"] for row in rows] == [line["transition"] for line in told["lines"]]


@pytest.mark.parametrize(
    ("words", "wanted"),
    [
        ((), 2),
        (("--metal", "Cu"), 2),
        (("--metal", "Fe={file}"), 2),
        (("--metal", "Zx={file}"), 2),
        (("--metal", "Cu=no_such_file.csv"), 1),
        (("--metal", "Al={file}"), 1),
        (("--metal", "Cu={file}", "--within", "200:600"), 1),
    ],
)
def test_refusals_are_one_line(words: tuple[str, ...], wanted: int, tmp_path: Path, run: Run) -> None:
    copper = written(tmp_path / "copper.csv", metal_spectrum("Cu", AXIS, 1))
    code, out, err = run("scale", *(word.format(file=copper) for word in words))
    assert (code, out) == (wanted, "")
    assert len(err.splitlines()) == 1
    assert err.startswith("ident: ")


def test_a_damaged_table_of_reference_lines_is_refused(tmp_path: Path) -> None:
    for name in ("scale_lines.csv", "sources.csv"):
        (tmp_path / name).write_bytes((reference_folder() / name).read_bytes())
    path = tmp_path / "scale_lines.csv"
    good = path.read_text(encoding="utf-8")
    for old, new, column in (("Cu,29,L3M45M45", "Fe,26,L3M45M45", "symbol"), ("sharp", "keen", "role")):
        path.write_text(good.replace(old, new, 1), encoding="utf-8")
        with pytest.raises(TableError) as failed:
            read_rows("scale_lines.csv", ScaleLine, tmp_path)
        assert failed.value.column == column
