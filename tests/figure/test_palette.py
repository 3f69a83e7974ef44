"""Colours: apart in grey, on paper, and for eyes that miss one kind of cone."""

from __future__ import annotations

import itertools

import numpy as np
import pytest

from ident.report.palette import FAINT_INK, INK, MARKS, PAPER, PREDICTED

# Machado, Oliveira and Fernandes, IEEE Trans. Vis. Comput. Graph. 15 (2009) 1291, severity 1.0, linear RGB; from memory
MISSING = {
    "long cones": [[0.152286, 1.052583, -0.204868], [0.114503, 0.786281, 0.099216], [-0.003882, -0.048116, 1.051998]],
    "middle cones": [[0.367322, 0.860646, -0.227968], [0.280085, 0.672501, 0.047413], [-0.011820, 0.042940, 0.968881]],
    "short cones": [[1.255528, -0.076749, -0.178779], [-0.078411, 0.930809, 0.147602], [0.004733, 0.691367, 0.303900]],
    "none": np.eye(3).tolist(),
}
# sRGB to XYZ, D65: IEC 61966-2-1
XYZ = np.array([[0.4124, 0.3576, 0.1805], [0.2126, 0.7152, 0.0722], [0.0193, 0.1192, 0.9505]])
COLOURS = [mark.colour for mark in MARKS.values()]
PAIRS = list(itertools.combinations(COLOURS, 2))


def linear(colour: str) -> np.ndarray:
    part = np.array([int(colour[k : k + 2], 16) for k in (1, 3, 5)]) / 255.0
    return np.where(part <= 0.04045, part / 12.92, ((part + 0.055) / 1.055) ** 2.4)


def contrast(first: str, second: str) -> float:
    """Contrast ratio of the Web Content Accessibility Guidelines 2.2: what is left of colours in grey."""
    light, dark = sorted((float(XYZ[1] @ linear(colour)) for colour in (first, second)), reverse=True)
    return (light + 0.05) / (dark + 0.05)


def lab(rgb: np.ndarray) -> np.ndarray:
    """CIE L*a*b*, D65 (ISO/CIE 11664-4)."""
    t = XYZ @ np.clip(rgb, 0.0, 1.0) / (XYZ @ np.ones(3))
    f = np.where(t > (6 / 29) ** 3, np.cbrt(t), t / (3 * (6 / 29) ** 2) + 4 / 29)
    return np.array([116 * f[1] - 16, 500 * (f[0] - f[1]), 200 * (f[1] - f[2])])


@pytest.mark.parametrize("colour", [*COLOURS])
def test_marks_stand_out_from_paper(colour: str) -> None:
    """At least 3 to 1, WCAG 2.2, 1.4.11."""
    assert contrast(colour, PAPER) >= 3.0


@pytest.mark.parametrize("colour", [INK, FAINT_INK])
def test_writing_stands_out_from_paper(colour: str) -> None:
    """At least 4.5 to 1, WCAG 2.2, 1.4.3."""
    assert contrast(colour, PAPER) >= 4.5


@pytest.mark.parametrize(("first", "second"), PAIRS)
def test_marks_differ_in_grey(first: str, second: str) -> None:
    """A quarter of lightness: common practice, no source; shapes and words carry the same."""
    assert contrast(first, second) >= 1.25


@pytest.mark.parametrize("missing", MISSING)
@pytest.mark.parametrize(("first", "second"), PAIRS)
def test_marks_differ_whatever_cones_are_missing(missing: str, first: str, second: str) -> None:
    """Ten units of CIE L*a*b*, four times what is just seen side by side (common practice, no source)."""
    seen = [lab(np.array(MISSING[missing]) @ linear(colour)) for colour in (first, second)]
    assert np.linalg.norm(seen[0] - seen[1]) >= 10.0


def test_no_two_marks_share_a_shape_or_a_word() -> None:
    assert len({mark.shape for mark in MARKS.values()}) == len(MARKS) == len({mark.word for mark in MARKS.values()})


def test_the_predicted_curve_differs_from_the_measured_one_in_grey() -> None:
    assert contrast(PREDICTED, INK) >= 4.5
    assert contrast(PREDICTED, PAPER) >= 2.5
