"""The demo files are those that `make_demo` makes, are read as they were meant, and say what they are."""

from __future__ import annotations

import re

import numpy as np
import pytest

import ident
from ident.readers import read_spectrum

from .make_demo import DEMOS, FOLDER, Demo, demo_cases, render_demos

FILES = [demo.file for demo in DEMOS]
LABELS = "slip_ring_dead_labels.csv"  # for `ident recheck`, not a spectrum
PAGE = {"slip_ring_report.toml", "slip_ring_spots.png"}  # for `ident assign --page`
PICTURE = "slip_ring_contrast.png"  # what `ident contrast --figure` draws, for the README


@pytest.mark.parametrize("file", FILES)
def test_file_is_made_by_the_forward_model_to_the_byte(file: str) -> None:
    # The same bytes on any machine: seeds are fixed, counts are whole numbers.
    assert (FOLDER / file).read_bytes() == render_demos()[file]


@pytest.mark.parametrize("file", FILES)
def test_file_says_that_it_is_invented(file: str) -> None:
    assert "INVENTED DATA" in (FOLDER / file).read_text(encoding="utf-8")[:600]


def test_readme_names_every_file_and_what_has_to_be_found() -> None:
    text = (FOLDER / "README.md").read_text(encoding="utf-8")
    rows = re.findall(r"^\| `([^`]+)` \|.*\| ([^|]+) \| [^|]+ \|$", text, flags=re.MULTILINE)
    found = {file: set(elements.split(", ")) for file, elements in rows}
    assert found == {file: set(case.must) for file, case in demo_cases().items()}
    assert set(found) | {"README.md", LABELS, PICTURE} | PAGE == {path.name for path in FOLDER.iterdir()}


@pytest.mark.parametrize("file", FILES)
def test_file_is_read_as_it_was_made(file: str) -> None:
    made = demo_cases()[file].spectrum
    read = read_spectrum(FOLDER / file, column="sum" if file == "bracket_stain.csv" else None)
    assert len(read.windows) == len(made.windows)
    for ours, theirs in zip(read.windows, made.windows, strict=True):
        assert np.allclose(ours.energy_ev, theirs.energy_ev, atol=0.005)
        assert np.allclose(ours.intensity, theirs.intensity, rtol=1e-3, atol=1e-4 * np.ptp(theirs.intensity))


@pytest.mark.parametrize("demo", DEMOS, ids=lambda demo: demo.file)
def test_ident_finds_what_the_readme_promises(demo: Demo) -> None:
    # Truth: what was put into the forward model.
    case = demo_cases()[demo.file]
    answer = _answer(demo, demo.expect)
    called = {assignment.element for assignment in answer.assignments if assignment.probability >= 0.5}
    assert case.must <= called <= set(case.truth)


@pytest.mark.parametrize("demo", [demo for demo in DEMOS if demo.expect], ids=lambda demo: demo.file)
def test_without_what_is_known_of_the_part_the_element_is_named_and_left_open(demo: Demo) -> None:
    # Lead and silicon stand at the same energy, and gold and aluminium nearly; common practice, no source.
    case = demo_cases()[demo.file]
    said = {assignment.element: assignment.verdict for assignment in _answer(demo, ()).assignments}
    assert case.must <= set(said)  # at 0.01 or more: not forgotten, though perhaps set aside
    assert not {element for element, verdict in said.items() if verdict == "present"} - set(case.truth)


def _answer(demo: Demo, expect: tuple[str, ...]) -> ident.Identification:
    spectrum = read_spectrum(FOLDER / demo.file, column="sum" if demo.file == "bracket_stain.csv" else None)
    return ident.identify(spectrum, insulator=demo.file.endswith(".vms"), expect=expect)
