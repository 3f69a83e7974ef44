"""`--figure` from outside: files, folders, errors in one line with a remedy, and what is loaded without it."""

from __future__ import annotations

import shutil
import subprocess
import sys
from pathlib import Path

import pytest

from tests.program import Run, one_error_line

from .conftest import DEMO, PLATINUM


def test_one_spectrum_into_one_file_and_the_answer_as_ever(run: Run, tmp_path: Path) -> None:
    without = run("assign", "--quiet", PLATINUM)[1]
    code, out, err = run("assign", "--quiet", "--figure", tmp_path / "pt.PNG", PLATINUM)
    assert (code, err) == (0, "")
    assert out == without
    assert (tmp_path / "pt.PNG").read_bytes().startswith(b"\x89PNG")


def test_several_spectra_into_a_folder_that_is_made(run: Run, tmp_path: Path) -> None:
    same = tmp_path / "other" / PLATINUM.name
    same.parent.mkdir()
    shutil.copy(PLATINUM, same)
    folder = tmp_path / "figures" / "today"
    code, _, err = run("assign", "--quiet", "--figure", folder, PLATINUM, same, DEMO / "connector_pin_derivative.txt")
    assert (code, err) == (0, "")
    names = sorted(path.name for path in folder.iterdir())
    assert names == ["connector_pin_derivative.png", "pt111_derivative.png", "pt111_derivative_2.png"]


def test_windows_taken_apart_have_a_figure_each(run: Run, tmp_path: Path) -> None:
    code, _, _ = run("assign", "--quiet", "--separate", "--figure", tmp_path, DEMO / "terminal_windows.csv")
    assert code == 0
    assert len(list(tmp_path.glob("terminal_windows*.png"))) == 5  # windows, says the README of the demo spectra


def test_several_inputs_into_one_file_is_wrong_usage(run: Run, tmp_path: Path) -> None:
    code, out, err = run("assign", "--quiet", "--figure", tmp_path / "a.png", PLATINUM, PLATINUM)
    assert (code, out) == (2, "")
    assert "name a folder" in one_error_line(err)
    assert not list(tmp_path.iterdir())


def test_several_spectra_of_one_input_into_one_file(run: Run, tmp_path: Path) -> None:
    code, _, err = run("assign", "--quiet", "--separate", "--figure", tmp_path / "a.png", DEMO / "terminal_windows.csv")
    assert code == 1
    assert "name a folder" in one_error_line(err)
    assert not list(tmp_path.iterdir())


@pytest.mark.parametrize("name", ["figure.jpg", "figure.tiff", "figure.png.exe"])
def test_other_endings_are_wrong_usage(run: Run, tmp_path: Path, name: str) -> None:
    code, out, err = run("assign", "--quiet", "--figure", tmp_path / name, PLATINUM)
    assert (code, out) == (2, "")
    assert "png, svg or pdf" in one_error_line(err)


@pytest.mark.parametrize("place", ["nowhere/figure.png", "file/figure.png", "file/folder", "file"])
def test_a_place_that_cannot_be_written_is_said_before_anything_is_read(run: Run, tmp_path: Path, place: str) -> None:
    (tmp_path / "file").write_text("not a folder", encoding="utf-8")
    code, out, err = run("assign", "--quiet", "--figure", tmp_path / place, PLATINUM)
    assert (code, out) == (1, "")
    assert one_error_line(err)
    assert (tmp_path / "file").read_text(encoding="utf-8") == "not a folder"


def test_an_input_that_fails_leaves_the_others_their_figures(run: Run, tmp_path: Path) -> None:
    code, _, err = run("assign", "--quiet", "--figure", tmp_path, "no_such_file.csv", PLATINUM)
    assert code == 1
    assert "no_such_file" in one_error_line(err)
    assert [path.name for path in tmp_path.iterdir()] == ["pt111_derivative.png"]


@pytest.mark.parametrize(("words", "wanted"), [((), False), (("--figure",), True)])
def test_matplotlib_is_loaded_for_a_figure_only_and_pyplot_never(
    tmp_path: Path, words: tuple[str, ...], wanted: bool
) -> None:
    arguments = [*words, *([str(tmp_path / "a.png")] if words else []), str(PLATINUM)]
    code = (
        "import sys\nfrom ident.cli import main\n"
        f"try:\n    main(['assign', *{arguments!r}])\nexcept SystemExit as end:\n    assert not end.code\n"
        "print('MODULES', *sys.modules)"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    loaded = done.stdout.partition("MODULES")[2].split()
    assert ("matplotlib" in loaded) is wanted
    assert "matplotlib.pyplot" not in loaded
