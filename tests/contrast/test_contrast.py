"""Suspect against clean, on spectra whose truth is known because the benchmark's forward model made them."""

from __future__ import annotations

import csv
import io
import json
import math
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from ident import Spectrum, contrast, tables
from ident.errors import InputError, SettingError
from ident.spectrum import Window
from tests.benchmarks.forward import Scale, build_case, draw_setup
from tests.benchmarks.samples import Constituent
from tests.program import Run, one_error_line

DEMO = Path(__file__).resolve().parents[2] / "demo_spectra"
PLATED = {"Cu": 0.7, "Ni": 0.3, "C": 0.4, "O": 0.3}
PAIRS = 14


def spot(surface: dict[str, float], seed: int, *, part: int = 4_000, offset_ev: float | None = None) -> Spectrum:
    """A direct survey of a spot; spectra of one part share what is drawn for its lines, not noise, axis and dwell."""
    sample = tuple(Constituent(element=element, strength=strength) for element, strength in surface.items())
    rng = np.random.default_rng(seed)
    setup = draw_setup(rng, "surveys", sample)
    while setup.recording.mode != "direct":
        setup = draw_setup(rng, "surveys", sample)
    shared = draw_setup(np.random.default_rng(part), "surveys", sample)
    recording = replace(setup.recording, resolution=0.005, times_energy=True, spikes=0, dead=0)
    recording = replace(recording, signal_to_noise=max(60.0, recording.signal_to_noise))
    scale = setup.scale if offset_ev is None else Scale(offset_ev=offset_ev, slope=0.0)
    setup = replace(setup, recording=recording, scale=scale, tilt=shared.tilt, film_nm=0.0, energy_scatter=0.3)
    case = build_case(rng, setup, sample, kind="surveys", seed=seed, recipe="contrast")
    return replace(case.spectrum, name=f"spot {seed}")


def test_spots_alike_but_for_dwell_step_and_axis_are_not_said_to_differ() -> None:
    wrong, changed, compared = 0, 0, 0
    for place in range(PAIRS):
        found = contrast(spot(PLATED, 4_100 + 2 * place), [spot(PLATED, 4_101 + 2 * place)])
        wrong += len(found.only_on_suspect) + len(found.only_on_clean)
        changed += len(found.enriched) + len(found.depleted)
        compared += len(found.differences)
    assert compared >= 3 * PAIRS
    assert wrong <= 0.08 * compared  # 4 of 59 when written, 3 of them potassium called beside carbon
    assert changed <= 0.15 * compared  # heights are drawn anew for every spectrum, by 30 % a line


def test_an_element_added_is_only_on_the_suspect() -> None:
    met = 0
    for place in range(PAIRS):
        suspect = spot({**PLATED, "Cl": 0.4}, 4_200 + 3 * place)
        found = contrast(suspect, [spot(PLATED, 4_201 + 3 * place), spot(PLATED, 4_202 + 3 * place)])
        met += [one.element for one in found.only_on_suspect] == ["Cl"]
        assert "Cl" not in {one.element for one in (*found.depleted, *found.only_on_clean)}
    assert met >= 0.7 * PAIRS


def test_ratios_lie_within_their_factor_as_often_as_they_should() -> None:
    """Twice as much nickel: two thirds of the ratios to copper within one factor, nearly all within two."""
    off = []
    for place in range(PAIRS):
        suspect = spot({**PLATED, "Ni": 0.6}, 4_300 + 3 * place)
        found = contrast(suspect, [spot(PLATED, 4_301 + 3 * place), spot(PLATED, 4_302 + 3 * place)], relative_to="Cu")
        nickel = [one for one in found.differences if one.element == "Ni" and one.ratio and one.ratio_factor]
        off += [abs(math.log(one.ratio / 2.0)) / math.log(one.ratio_factor) for one in nickel]  # type: ignore[operator, arg-type]
    assert len(off) >= 0.7 * PAIRS
    assert np.mean(np.array(off) < 1.0) >= 0.5
    assert np.mean(np.array(off) < 2.0) >= 0.85


def test_exchanging_suspect_and_clean_turns_the_answer_round() -> None:
    one, other = spot({**PLATED, "S": 0.4}, 4_400), spot(PLATED, 4_401)
    there, back = contrast(one, [other]), contrast(other, [one])
    assert [d.element for d in there.only_on_suspect] == [d.element for d in back.only_on_clean]
    ratios = {d.element: d.ratio for d in there.differences if d.ratio}
    for difference in back.differences:
        if difference.ratio and difference.element in ratios:
            assert difference.ratio * ratios[difference.element] == pytest.approx(1.0, rel=1e-6)


def test_counts_may_be_scaled_and_clean_ones_come_in_any_order() -> None:
    suspect, clean = spot({**PLATED, "S": 0.4}, 4_500), [spot(PLATED, 4_501), spot(PLATED, 4_502)]
    plain = contrast(suspect, clean)
    turned = contrast(suspect, clean[::-1])
    scaled = contrast(
        replace(
            suspect,
            windows=tuple(Window(energy_ev=w.energy_ev, intensity=0.25 * w.intensity) for w in suspect.windows),
        ),
        clean,
    )
    for other in (turned, scaled):
        for one, two in zip(plain.differences, other.differences, strict=True):
            assert (one.element, one.verdict) == (two.element, two.verdict)
            if one.ratio is not None:
                assert two.ratio == pytest.approx(one.ratio, rel=0.02)


def test_what_is_not_in_every_range_is_not_compared() -> None:
    """Aluminium's low line is in both scans and its high one in one: the low one alone is compared."""
    suspect = spot({"Al": 0.8, "O": 0.4, "C": 0.2}, 4_600)
    found = contrast(suspect, [suspect.crop(30.0, 900.0)])
    aluminium = [one for one in found.differences if one.element == "Al"]
    assert all("KL23L23" not in one.lines for one in aluminium)
    with pytest.raises(InputError, match="too little to compare"):
        contrast(suspect, [suspect.crop(20.0, 60.0)])


def test_relative_to_an_element_that_is_not_there_is_refused() -> None:
    with pytest.raises(SettingError, match="nothing can be relative to it"):
        contrast(spot(PLATED, 4_700), [spot(PLATED, 4_701)], relative_to="Au")


def test_hints_come_from_what_is_new_and_say_what_could_prove_them() -> None:
    """Sodium and chlorine together: salt (common practice, no source)."""
    found = contrast(spot({**PLATED, "Na": 0.4, "Cl": 0.7}, 4_800), [spot(PLATED, 4_801)])
    assert {"Na", "Cl"} <= {one.element for one in found.only_on_suspect}
    assert found.hints[0].pattern == "salt or skin residue"
    for hint in found.hints:
        assert "elements alone cannot prove it" in hint.text
        assert hint.test
    assert not contrast(spot(PLATED, 4_802), [spot(PLATED, 4_803)]).hints


def test_the_table_of_residues_covers_what_workshops_meet() -> None:
    rows = tables.residues()
    assert len(rows) >= 20
    text = " ".join(row.pattern for row in rows)
    for word in ("salt", "flux", "silicone", "fluoropolymer", "etch", "lubricant", "alumina", "tarnish", "glass",
                 "bone", "water", "bath"):  # fmt: skip
        assert word in text


def test_json_has_the_keys_promised(run: Run) -> None:
    code, out, err = run("contrast", "--format", "json", DEMO / "slip_ring_dead.csv", DEMO / "slip_ring_reference.csv")
    answer = json.loads(out)
    assert code == 0
    groups = ("only_on_suspect", "enriched", "depleted", "only_on_clean", "unchanged")
    assert {"suspect", "clean", "hints", *groups} <= set(answer)
    for group in groups:
        for item in answer[group]:
            assert {"element", "probability", "ratio", "ratio_factor"} <= set(item)
    assert {item["element"] for item in answer["only_on_suspect"]} == {"S", "Cl"}
    assert {"pattern", "text"} <= set(answer["hints"][0])
    assert "one clean spectrum" in err


def test_text_csv_and_figure(run: Run, tmp_path: Path) -> None:
    files = (DEMO / "valve_stem_coated.csv", DEMO / "valve_stem_bare.csv")
    code, out, _ = run("contrast", "--figure", tmp_path / "stems.svg", *files)
    assert code == 0
    assert "N: only on suspect" in out
    assert "N KVV" in (tmp_path / "stems.svg").read_text(encoding="utf-8")
    code, out, _ = run("contrast", "--format", "csv", "--quiet", *files)
    rows = list(csv.DictReader(io.StringIO(out)))
    assert {row["element"]: row["verdict"] for row in rows}["N"] == "only on suspect"


def test_wrong_usage_and_files_that_cannot_be_read(run: Run, tmp_path: Path) -> None:
    good = DEMO / "slip_ring_reference.csv"
    assert run("contrast", good)[0] == 2
    code, out, err = run("contrast", "--quiet", DEMO / "slip_ring_dead.csv", tmp_path / "none.csv", good)
    assert code == 1
    assert "only on suspect" in out  # the clean one that can be read is used
    assert "none.csv" in one_error_line(err)
    code, out, err = run("contrast", tmp_path / "none.csv", good)
    assert (code, out) == (1, "")
    assert one_error_line(err)
    assert run("contrast", "--figure", "x.bmp", good, good)[0] == 2
