"""Figures: what an analyst must be able to rely on in print. Rules on labels are the project's own; formats, contrast
and colour vision follow the publications named beside each check.
"""

from __future__ import annotations

import itertools
import re
import xml.etree.ElementTree as ET
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from ident.errors import InputError, SettingError
from ident.identification import ArtefactNote, Examination, examine
from ident.report import draw_figure
from ident.report.figure import make_figure
from ident.report.figure_labels import labels_of
from ident.spectrum import Spectrum

from .conftest import NAMES, examined

SVG_TEXT = "{http://www.w3.org/2000/svg}text"
STARTS = {"png": b"\x89PNG\r\n\x1a\n", "pdf": b"%PDF-", "svg": b"<?xml"}  # ISO/IEC 15948, ISO 32000, XML 1.0
LEVEL = r"(?:[KLMNOP]\d{0,2}|V)"
NAMED = re.compile(rf"(?:\+ |or )?([A-Z][a-z]?) ({LEVEL}{LEVEL}{LEVEL})\??")
NO_LINES = "unexplained|spike|dead point|flat stretch|saturation|plasmon loss|elastic peak|ionisation loss"
OTHER = re.compile(rf"(?:{NO_LINES}) \d+ eV|\+ \d+ more")


SHEETS: dict[str, Any] = {}


def drawn(crowd: Examination | None, name: str) -> Any:
    """The figure of a file, or of the crowd; drawn once, since these tests only look at it."""
    if name not in SHEETS:
        SHEETS[name] = make_figure(crowd if crowd is not None and name == "crowd" else examined(name))
    return SHEETS[name]


def panel(figure: Any, name: str) -> Any:
    return next(axes for axes in figure.axes if axes.get_gid() == name)


def written(figure: Any) -> list[Any]:
    figure.canvas.draw()
    axes = panel(figure, "differential")
    return [text for text in axes.texts if text.get_gid() == "minimum label" and text.get_visible()]


def boxes(figure: Any) -> list[Any]:
    return [text.get_window_extent() for text in written(figure)]


def leaders(figure: Any) -> list[np.ndarray]:
    axes = panel(figure, "differential")
    return [line.get_transform().transform(line.get_xydata()) for line in axes.lines if line.get_gid() == "leader"]


def marks(figure: Any, role: str) -> list[Any]:
    return [line for line in panel(figure, "differential").lines if line.get_gid() == f"mark {role}"]


def all_text(figure: Any) -> str:
    texts = [*figure.texts, *(text for axes in figure.axes for text in axes.texts)]
    return "\n".join(text.get_text() for text in texts)


@pytest.mark.parametrize("ending", sorted(STARTS))
def test_all_three_formats_are_written(tmp_path: Path, ending: str) -> None:
    path = tmp_path / f"figure.{ending}"
    draw_figure(examined("slip_ring_dead.csv"), path)
    assert path.read_bytes().startswith(STARTS[ending])
    assert path.stat().st_size > 10_000


def test_the_same_answer_gives_the_same_file(tmp_path: Path) -> None:
    for name in ("a.svg", "b.svg"):
        draw_figure(examined("bond_pad_lifted.txt"), tmp_path / name)
    assert (tmp_path / "a.svg").read_bytes() == (tmp_path / "b.svg").read_bytes()


def overlapping(found: list[Any]) -> list[tuple[Any, Any]]:
    return [(a, b) for a, b in itertools.combinations(found, 2) if a.overlaps(b)]


@pytest.mark.parametrize("name", NAMES)
def test_labels_stand_clear_of_each_other_on_real_spectra(name: str) -> None:
    found = boxes(drawn(None, name))
    assert found
    assert not overlapping(found)


def test_labels_stand_clear_of_each_other_in_a_crowd(crowd: Examination) -> None:
    figure = drawn(crowd, "crowd")
    found = boxes(figure)
    assert len(found) > 40
    assert not overlapping(found)
    frame = panel(figure, "differential").get_window_extent()
    for box in found:
        assert frame.x0 - 1 <= box.x0 <= box.x1 <= frame.x1 + 1
        assert frame.y0 - 1 <= box.y0 <= box.y1 <= frame.y1 + 1


def test_what_has_no_room_is_said(crowd: Examination) -> None:
    figure = drawn(crowd, "crowd")
    assert len(boxes(figure)) < len(labels_of(crowd.answer))
    assert "no room to label" in all_text(figure)


def crosses(first: np.ndarray, second: np.ndarray) -> bool:
    """Whether two segments (2, 2) cross, by the signs of the areas they span."""

    def side(a: np.ndarray, b: np.ndarray, c: np.ndarray) -> float:
        return float((b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0]))

    (a, b), (c, d) = first, second
    return side(a, b, c) * side(a, b, d) < -1e-6 and side(c, d, a) * side(c, d, b) < -1e-6


@pytest.mark.parametrize("name", [*NAMES, "crowd"])
def test_leaders_cross_neither_each_other_nor_a_label(name: str, crowd: Examination) -> None:
    figure = drawn(crowd, name)
    found = boxes(figure)
    paths = leaders(figure)
    assert paths
    segments = [(at, path[k : k + 2]) for at, path in enumerate(paths) for k in range(len(path) - 1)]
    for (at, first), (other, second) in itertools.combinations(segments, 2):
        assert at == other or not crosses(first, second)
    for box in found:
        inner = np.array([[box.x0 + 1, box.y0 + 1], [box.x1 - 1, box.y1 - 1]])
        for _, segment in segments:
            assert not crosses(segment, inner)


@pytest.mark.parametrize("name", [*NAMES, "crowd"])
def test_labels_stand_clear_of_the_curve_and_of_the_marks(name: str, crowd: Examination) -> None:
    figure = drawn(crowd, name)
    axes = panel(figure, "differential")
    found = boxes(figure)
    curves = [line for line in axes.lines if line.get_gid() is None and line.get_transform() == axes.transData]
    dots = [line for line in axes.lines if (line.get_gid() or "").startswith("mark")]
    assert curves
    assert dots
    for line in [*curves, *dots]:
        points = line.get_transform().transform(line.get_xydata())
        for box in found:
            inside = (points[:, 0] > box.x0) & (points[:, 0] < box.x1)
            assert not np.any(inside & (points[:, 1] > box.y0) & (points[:, 1] < box.y1))


@pytest.mark.parametrize("name", [*NAMES, "crowd"])
def test_labels_read_element_and_transition(name: str, crowd: Examination) -> None:
    examination = crowd if name == "crowd" else examined(name)
    known = {assignment.element for assignment in examination.answer.assignments}
    named = 0
    for text in written(drawn(crowd, name)):
        for line in text.get_text().split("\n"):
            found = NAMED.fullmatch(line)
            assert found or OTHER.fullmatch(line), line
            assert found is None or found[1] in known
            named += found is not None
    assert named


@pytest.mark.parametrize("name", [*NAMES, "crowd"])
def test_every_element_called_is_labelled_at_its_strongest_minimum(name: str, crowd: Examination) -> None:
    examination = crowd if name == "crowd" else examined(name)
    lines = {line for text in written(drawn(crowd, name)) for line in text.get_text().split("\n")}
    for assignment in examination.answer.assignments:
        met = [line for line in assignment.lines if line.found_ev is not None]
        if assignment.probability >= 0.5 and met:
            strongest = max(met, key=lambda line: line.relative_height)
            wanted = f"{assignment.element} {strongest.transition}"
            assert {wanted, f"+ {wanted}"} & lines


def test_shared_minima_are_half_filled_and_joined(crowd: Examination) -> None:
    figure = drawn(crowd, "crowd")
    shared = [label for label in labels_of(crowd.answer) if label.shared]
    assert shared
    assert all(label.text[1].startswith("+ ") for label in shared)
    assert any(line.get_fillstyle() == "left" for line in marks(figure, "present"))
    assert "shared minimum" in all_text(figure)


def test_unexplained_minima_and_artefacts_have_marks_and_words(crowd: Examination) -> None:
    figure = drawn(crowd, "crowd")
    texts = {text.get_text() for text in written(figure)}
    assert {"unexplained 640 eV", "spike 700 eV"} <= texts
    assert len(marks(figure, "unexplained")) == 2
    assert len(marks(figure, "artefact")) == 1
    assert {line.get_marker() for line in marks(figure, "unexplained")}.isdisjoint(
        {line.get_marker() for line in (*marks(figure, "artefact"), *marks(figure, "present"))}
    )


def test_verdicts_stand_beside_the_elements_in_words() -> None:
    answer = examined("slip_ring_dead.csv").answer
    said = [text.get_text() for text in panel(drawn(None, "slip_ring_dead.csv"), "assignments").texts]
    for verdict in ("present", "likely"):
        assert said.count(verdict) == sum(a.verdict == verdict for a in answer.assignments)


def test_recorded_derivatives_are_shown_alone_and_say_so() -> None:
    figure = drawn(None, "pt111_derivative.vms")
    assert not [axes for axes in figure.axes if axes.get_gid() == "direct"]
    assert "no direct panel" in panel(figure, "differential").get_xlabel()
    assert [axes for axes in drawn(None, "bracket_stain.csv").axes if axes.get_gid() == "direct"]


def test_panels_share_one_energy_axis_and_gaps_are_short() -> None:
    figure = drawn(None, "terminal_windows.csv")
    upper, lower = panel(figure, "differential"), panel(figure, "direct")
    assert upper.get_xlim() == lower.get_xlim()
    place = upper.transData.transform([(210.0, 0.0), (240.0, 0.0), (300.0, 0.0), (480.0, 0.0)])[:, 0]
    scanned, gap = place[2] - place[1], place[3] - place[2]
    assert gap < 0.2 * scanned  # 60 eV scanned, 180 eV not


def test_a_weak_high_energy_line_is_magnified_and_says_so() -> None:
    """A line of a hundredth of the strongest, alone above 800 eV, would be flat otherwise."""
    energy = np.arange(100.0, 1500.0, 1.0)
    lines = ((272.0, 100.0), (1100.0, 1.0))
    counts = 1000.0 + sum(h * 50.0 * np.exp(-0.5 * ((energy - at) / 3.0) ** 2) for at, h in lines)
    noise = np.random.default_rng(3).normal(0.0, 0.3, energy.size)
    figure = make_figure(examine(Spectrum.from_arrays(energy, counts + noise, kind="direct")))
    gains = [t.get_text() for t in panel(figure, "differential").texts if t.get_gid() == "gain"]
    assert "× 1" in gains
    assert any(int(text.removeprefix("× ")) >= 10 for text in gains)


def test_nothing_above_the_noise_is_drawn_too(tmp_path: Path) -> None:
    energy = np.arange(100.0, 800.0, 1.0)
    counts = np.random.default_rng(5).poisson(4000.0, energy.size)
    nothing = examine(Spectrum.from_arrays(energy, counts, kind="direct"))
    assert nothing.answer.minima == 0
    draw_figure(nothing, tmp_path / "nothing.svg")
    assert "Nothing stands above the noise" in (tmp_path / "nothing.svg").read_text(encoding="utf-8")


HOSTILE = "$\\frac{1}{0$ <script>alert(1)</script> &amp; \x1b[31m \u202e --> \u8bfb {x:.0f} %s"


def test_hostile_names_are_shown_as_text(tmp_path: Path) -> None:
    base = examined("slip_ring_dead.csv")
    answer = replace(
        base.answer,
        spectrum=HOSTILE,
        header={**base.answer.header, "sample": HOSTILE},
        artefacts=(ArtefactNote(energy_ev=500.0, what=HOSTILE, kind=HOSTILE),),
    )
    for ending in STARTS:
        draw_figure(replace(base, answer=answer), tmp_path / f"hostile.{ending}")
    root = ET.parse(tmp_path / "hostile.svg").getroot()
    texts = ["".join(text.itertext()) for text in root.iter(SVG_TEXT)]
    shown = next(text for text in texts if text.startswith("$\\frac"))
    assert "<script>alert(1)</script> &amp; \\x1b[31m \\u202e -->" in shown
    assert not [element for element in root.iter() if element.tag.endswith("script")]


def test_a_very_long_name_stays_on_the_sheet() -> None:
    base = examined("slip_ring_dead.csv")
    answer = replace(base.answer, spectrum="W" * 900, header={**base.answer.header, "sample": "W" * 900})
    figure = make_figure(replace(base, answer=answer))
    figure.canvas.draw()
    for text in figure.texts:
        assert text.get_window_extent().x1 <= figure.bbox.x1


def test_the_column_stays_on_the_sheet(crowd: Examination) -> None:
    for name in ("crowd", *NAMES):
        figure = drawn(crowd, name)
        figure.canvas.draw()
        for text in panel(figure, "assignments").texts:
            box = text.get_window_extent()
            assert box.x1 <= figure.bbox.x1, text.get_text()
            assert box.y0 >= 0.0, text.get_text()


def test_settings_of_matplotlib_are_neither_used_nor_changed() -> None:
    import matplotlib as mpl

    with mpl.rc_context({"font.size": 30.0, "axes.facecolor": "red", "text.usetex": False}):
        before = dict(mpl.rcParams)
        figure = make_figure(examined("slip_ring_dead.csv"))
        assert dict(mpl.rcParams) == before
    assert panel(figure, "differential").get_facecolor()[:3] == (1.0, 1.0, 1.0)


def test_other_endings_are_refused_in_one_line(tmp_path: Path) -> None:
    with pytest.raises(SettingError, match="png, svg or pdf"):
        draw_figure(examined("slip_ring_dead.csv"), tmp_path / "figure.jpg")


def test_a_file_that_cannot_be_written_is_said_in_one_line(tmp_path: Path) -> None:
    with pytest.raises(InputError, match="could not be written") as failed:
        draw_figure(examined("slip_ring_dead.csv"), tmp_path / "nowhere" / "figure.png")
    assert "\n" not in str(failed.value)
