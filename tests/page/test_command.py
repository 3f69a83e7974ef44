"""`--page` from outside: what is written, what is refused before anything is read, and what is loaded without it."""

from __future__ import annotations

import importlib.util
import os
import shutil
import subprocess
import sys
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from PIL import Image as Picture

from ident.report.page import Page, whole
from tests.program import Run, one_error_line

from .conftest import DEMO, ROOT, examined
from .parsed import parse

PIN = DEMO / "connector_pin_derivative.txt"
WINDOWS = DEMO / "terminal_windows.csv"


def test_the_answer_is_as_ever_and_the_page_beside_it(run: Run, tmp_path: Path) -> None:
    without = run("assign", "--quiet", PIN)[1]
    code, out, err = run("assign", "--quiet", "--page", tmp_path / "a.HTML", PIN)
    assert (code, err) == (0, "")
    assert out == without
    page = parse(tmp_path / "a.HTML").root
    assert page.one("h1").text == "data connector, nickel-plated pin 4: dull"  # the sample's name in the file
    assert f"--page {tmp_path / 'a.HTML'}" in page.one("code", "command").text


def test_a_folder_makes_one_page_with_a_summary(run: Run, tmp_path: Path) -> None:
    code, _, _ = run("assign", "--quiet", "--page", tmp_path / "a.html", PIN, WINDOWS, DEMO / "bond_pad_lifted.txt")
    assert code == 0
    page = parse(tmp_path / "a.html").root
    assert len(list(page.all("article"))) == 3
    assert len(list(page.one("table", "matrix").one("tbody").all("tr"))) == 3


def test_header_analyst_and_image_arrive(run: Run, tmp_path: Path) -> None:
    (tmp_path / "about.toml").write_text(
        '[report]\noperator = "in the file"\n[[spot]]\nname = "pit"\nx = 10\ny = 10\n', encoding="utf-8"
    )
    Picture.fromarray(np.zeros((20, 30), dtype=np.uint8)).save(tmp_path / "a.png")
    code, _, err = run(
        *("assign", "--quiet", "--page", tmp_path / "a.html", "--about", tmp_path / "about.toml"),
        *("--header", "operator=on the line", "--header", "dwell=50 ms", "--image", tmp_path / "a.png", PIN),
    )
    assert (code, err) == (0, "")
    page = parse(tmp_path / "a.html").root
    told = {e.one("dt").text: e.one("dd").text for e in page.one("dl", "header").all("div", "entry")}
    assert told["operator"] == "on the line (given)"  # what is said on the line goes before the file
    assert told["dwell"] == "50 ms (given)"
    assert len(list(page.one("svg", "image").all("circle", "spot-ring"))) == 1


def test_what_the_file_says_stands_in_the_header(run: Run, tmp_path: Path) -> None:
    """The demo file in ISO 14976 gives a date, an analyser mode, dwell and sweeps: see its lines."""
    assert run("assign", "--quiet", "--page", tmp_path / "a.html", DEMO / "feedthrough_bead.vms")[0] == 0
    page = parse(tmp_path / "a.html").root
    told = {e.one("dt").text: e.one("dd").text for e in page.one("dl", "header").all("div", "entry")}
    assert told["analyser mode"] == "FRR"
    assert told["sweeps"] == "1"
    assert told["date of measurement"].startswith("2031-03-14")
    assert told["laboratory"] == "Skerry Point buoy workshop"


def test_a_failing_input_leaves_the_others_their_page(run: Run, tmp_path: Path) -> None:
    code, _, err = run("assign", "--quiet", "--page", tmp_path / "a.html", "no_such.csv", PIN)
    assert code == 1
    assert "no_such" in one_error_line(err)
    assert "1 spectrum from 2 inputs" in parse(tmp_path / "a.html").root.text
    code, _, err = run("assign", "--quiet", "--page", tmp_path / "b.html", "no_such.csv")
    assert (code, (tmp_path / "b.html").exists()) == (1, False)
    assert one_error_line(err)


def test_nothing_above_the_noise_makes_a_page_that_says_so(run: Run, tmp_path: Path) -> None:
    energy = np.arange(100.0, 400.0)
    counts = np.random.default_rng(5).poisson(1e4, energy.size)
    rows = "\n".join(f"{e},{c}" for e, c in zip(energy, counts, strict=True))
    (tmp_path / "flat.csv").write_text(f"energy (eV),counts\n{rows}\n", encoding="utf-8")
    code, _, _ = run("assign", "--quiet", "--page", tmp_path / "a.html", tmp_path / "flat.csv")
    assert code == 3
    assert "Nothing stands above the noise." in parse(tmp_path / "a.html").root.text


@pytest.mark.parametrize(
    "words",
    [("--page", "a.pdf"), ("--page", "a"), ("--about", "a.toml"), ("--header", "operator=x"), ("--image", "a.png"),
     ("--page", "a.html", "--header", "operator"), ("--page", "a.html", "--header", "operater=x")],
)  # fmt: skip
def test_wrong_usage_is_one_line(
    run: Run, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, words: tuple[str, ...]
) -> None:
    monkeypatch.chdir(tmp_path)
    code, out, err = run("assign", "--quiet", *words, PIN)
    assert (code, out) == (2, "")
    assert one_error_line(err)
    assert not list(tmp_path.iterdir())


@pytest.mark.parametrize("place", ["nowhere/a.html", "file/a.html", "folder.html"])
def test_a_place_that_cannot_be_written_is_said_before_anything_is_read(run: Run, tmp_path: Path, place: str) -> None:
    (tmp_path / "file").write_text("not a folder", encoding="utf-8")
    (tmp_path / "folder.html").mkdir()
    code, out, err = run("assign", "--quiet", "--page", tmp_path / place, PIN)
    assert (code, out) == (1, "")
    assert one_error_line(err)


def test_about_and_image_that_do_not_fit_are_said_before_anything_is_read(run: Run, tmp_path: Path) -> None:
    (tmp_path / "about.toml").write_text('[report]\noperater = "x"\n', encoding="utf-8")
    (tmp_path / "other.toml").write_text('[analyst.Cu]\nremark = "x"\nspectrum = "other.csv"\n', encoding="utf-8")
    for words in (("--about", "about.toml"), ("--about", "other.toml"), ("--image", "about.toml")):
        code, out, err = run("assign", "--quiet", "--page", tmp_path / "a.html", words[0], tmp_path / words[1], PIN)
        assert (code, out) == (1, "")
        assert words[1] in one_error_line(err)


def test_without_the_plotting_library_it_says_what_to_install(
    run: Run, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    real = importlib.util.find_spec
    monkeypatch.setattr(importlib.util, "find_spec", lambda name, *rest: None if name == "bokeh" else real(name, *rest))
    code, out, err = run("assign", "--quiet", "--page", tmp_path / "a.html", PIN)
    assert (code, out) == (1, "")
    assert "auger-ident[page]" in one_error_line(err)


def test_a_page_of_too_many_spectra_is_lean_and_then_refused(monkeypatch: pytest.MonkeyPatch) -> None:
    page = Page(inputs=["many"] * 9)
    for _ in range(9):
        page.add(examined("slip_ring_dead.csv"))
    full = page.render()
    monkeypatch.setattr(whole, "MOST_BYTES", len(full.encode()) - 1)
    lean = page.render()
    assert len(lean) < len(full)
    assert whole.LEFT_OUT in lean
    assert whole.LEFT_OUT not in full
    monkeypatch.setattr(whole, "MOST_BYTES", len(lean.encode()) - 1)
    with pytest.raises(whole.InputError, match=r"make pages of about [1-8] spectra"):
        page.render()


def test_a_disk_that_is_full_is_one_line(run: Run, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def full(*_: Any, **__: Any) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(Path, "write_text", full)
    code, _, err = run("assign", "--quiet", "--page", tmp_path / "a.html", PIN)
    assert code == 1
    assert "No space left" in one_error_line(err)


@pytest.mark.parametrize("wanted", [False, True])
def test_the_plotting_library_is_loaded_for_a_page_only(tmp_path: Path, wanted: bool) -> None:
    words = ["--page", str(tmp_path / "a.html")] if wanted else []
    code = (
        "import sys\nfrom ident.cli import main\n"
        f"try:\n    main(['assign', *{words!r}, {str(PIN)!r}])\nexcept SystemExit as end:\n    assert not end.code\n"
        "print('MODULES', *sys.modules)"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert ("bokeh" in done.stdout.partition("MODULES")[2].split()) is wanted


def test_the_same_call_writes_the_same_page(tmp_path: Path) -> None:
    pages = []
    for folder in (tmp_path / "a", tmp_path / "b"):
        folder.mkdir()
        shutil.copy(PIN, folder)
        subprocess.run(
            [sys.executable, "-m", "ident", "assign", "--quiet", "--page", "page.html", PIN.name],
            cwd=folder, env={**os.environ, "PYTHONPATH": str(ROOT)}, check=True, capture_output=True,
        )  # fmt: skip
        pages.append((folder / "page.html").read_bytes())
    assert pages[0] == pages[1]
    assert str(tmp_path).encode() not in pages[0]


def test_help_has_an_example(run: Run) -> None:
    assert "--page report.html" in run("assign", "--help")[1]
