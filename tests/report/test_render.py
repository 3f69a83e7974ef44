"""Renderers: nothing from a file may act on a terminal or in a spreadsheet. Common practice, no source, but for
the rules on CSV cells, which follow the OWASP note on CSV injection (from memory).
"""

from __future__ import annotations

import csv
import io
import json
from dataclasses import fields, replace

import numpy as np
import pytest

from ident.identification import (
    ArtefactNote,
    Assignment,
    Identification,
    LineNote,
    Scale,
    State,
    Unexplained,
    Untestable,
    verdict_of,
)
from ident.reasons import Reason
from ident.report.csv_rows import ASSIGN_COLUMNS, assign_rows, render_rows
from ident.report.escape import printable, text_cell
from ident.report.json_lines import render_json
from ident.report.text_assign import render_assign

ANSWER = Identification(
    spectrum="part.csv",
    sha256=None,
    edition="ident 0, tables 0",
    settings={"insulator": False},
    header={"sample": "=cmd()\x1b[31m red", "beam_kev": 5.0},
    kind="direct",
    ranges_ev=((30.0, 1000.0),),
    scale=Scale(offset_ev=1.0, offset_sigma_ev=float("nan"), slope=0.0, slope_sigma=0.001, charging="cannot tell"),
    minima=3,
    assignments=(
        Assignment(
            element="Ti",
            z=22,
            probability=0.9496,
            verdict="likely",
            lines=(
                LineNote(
                    transition="L3M23V",
                    expected_ev=418.0,
                    sigma_ev=1.3,
                    found_ev=417.6,
                    share=1.0,
                    status="met",
                    relative_height=1.0,
                ),
            ),
            state=State(name="oxide", shift_ev=-2.0),
            reasons=(
                Reason(code="line-met", side="for", text="418.0 eV (L3M23V) met at 417.6, 0.3 sd"),
                Reason(code="line-missing", side="against", text="nothing at 387 eV (L3M23M23)"),
            ),
            rivals=(),
        ),
    ),
    inseparable=(),
    unexplained=(Unexplained(energy_ev=250.0, significance=12.0, candidates=("Pt",)),),
    limits=(),
    why_not=(),
    untestable=(Untestable(element="H", why="too few electrons for an Auger transition"),),
    artefacts=(ArtefactNote(energy_ev=500.0, what="spike of one channel", kind="spike"),),
    cautions=(),
    warnings=("the step is coarse",),
)


def test_text_shows_all_parts() -> None:
    text = render_assign(ANSWER)
    for part in ("Ti", "likely", "met at 417.6", "nothing at 387", "250.0 eV", "spike", "too few electrons", "coarse"):
        assert part in text


def test_text_never_rounds_over_a_threshold() -> None:
    """A "likely" element must not be printed with the 0.95 from which INTERFACE calls it present."""
    assert "0.94" in render_assign(ANSWER)
    assert "0.95" not in render_assign(ANSWER)


def test_text_lines_fit_a_terminal_and_hold_no_control_characters() -> None:
    text = render_assign(ANSWER)
    assert "\x1b" not in text
    assert "\\x1b" in text
    assert max(len(line) for line in text.splitlines()) <= 100


@pytest.mark.parametrize("char", ["\x00", "\x1b", "\x9b", "\u202e", "\u2028", "\r", "\n"])
def test_control_and_direction_characters_are_shown(char: str) -> None:
    assert char not in printable(f"a{char}b")


@pytest.mark.parametrize("start", [*list("=+-@"), "\t", "\r"])
def test_cells_that_start_like_a_formula_are_made_harmless(start: str) -> None:
    assert text_cell(start + "1").startswith("'")
    assert text_cell("plain") == "plain"


def test_negative_numbers_in_csv_stay_numbers() -> None:
    (row,) = csv.reader(io.StringIO(render_rows([(-1.5, "-1.5", None, float("nan"))])))
    assert float(row[0]) == -1.5
    assert row[1:] == ["'-1.5", "", ""]


def test_csv_rows_fit_their_header() -> None:
    rows = list(csv.DictReader(io.StringIO(render_rows([ASSIGN_COLUMNS, *assign_rows(ANSWER)]))))
    assert rows[0]["element"] == "Ti"
    assert rows[0]["sample"].startswith("'=")
    assert None not in rows[0]


def test_json_has_null_for_what_is_not_finite_and_one_line() -> None:
    line = render_json(ANSWER.to_dict())
    assert line.count("\n") == 1
    assert json.loads(line)["scale"]["offset_sigma_ev"] is None
    with pytest.raises(ValueError, match="not JSON compliant"):
        render_json({"value": float("inf")})


# The keys that the interface of the program promises for `assign`.
PROMISED = {
    *("schema", "spectrum", "sha256", "edition", "settings", "header", "kind", "ranges_ev", "scale", "assignments"),
    *("inseparable", "unexplained", "limits", "untestable", "artefacts", "cautions", "warnings"),
}
PROMISED_ASSIGNMENT = {
    *("element", "z", "probability", "verdict", "lines", "state", "reasons", "rivals", "abundance"),
}


def test_json_keys_are_those_promised() -> None:
    plain = ANSWER.to_dict()
    assert set(plain) >= PROMISED
    assert plain["schema"] == 1
    (assignment,) = plain["assignments"]
    assert set(assignment) == PROMISED_ASSIGNMENT
    assert set(assignment["lines"][0]) >= {"transition", "expected_ev", "sigma_ev", "found_ev", "share", "status"}
    assert set(assignment["reasons"][0]) == {"code", "side", "text"}
    assert set(plain["scale"]) >= {"offset_ev", "offset_sigma_ev", "slope", "slope_sigma", "charging"}


def test_numpy_numbers_do_not_reach_json_unseen() -> None:
    odd = replace(ANSWER, ranges_ev=((float(np.float64(30.0)), 1000.0),))
    assert json.loads(render_json(odd.to_dict()))["ranges_ev"] == [[30.0, 1000.0]]


def test_frame_has_one_row_an_assignment() -> None:
    frame = ANSWER.to_frame()
    assert list(frame["element"]) == ["Ti"]
    assert frame.loc[0, "reasons_against"] == 1


def test_verdicts_have_the_thresholds_promised() -> None:
    """Thresholds of the program's interface: 0.95, 0.5 and 0.05."""
    assert [verdict_of(p) for p in (1.0, 0.95, 0.9499, 0.5, 0.4999, 0.05, 0.0499)] == [
        *("present", "present", "likely", "likely", "possible", "possible", "not supported"),
    ]


def test_answers_cannot_be_altered() -> None:
    with pytest.raises(AttributeError):
        ANSWER.kind = "derivative"  # type: ignore[misc]
    assert all(field.kw_only for field in fields(Identification))
