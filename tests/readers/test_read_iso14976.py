"""ISO 14976 files, written by `iso14976_writer` from the published order of lines and read back."""

from __future__ import annotations

import hashlib
import re
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from iso14976_writer import WriterBlock, WriterFile, render
from reader_files import axis, curve, write

from ident.errors import InputError
from ident.readers import list_columns, read_spectra, read_spectrum

DATA = Path(__file__).parents[1] / "data"
ALL_MODES = ("MAP", "MAPDP", "MAPSV", "MAPSVDP", "NORM", "SDP", "SDPSV", "SEM", "NOEXP")  # ISO 14976:1998


def region(start: float = 100, points: int = 40, *, scale: float = 1.0, **fields: Any) -> WriterBlock:
    """A block of whole numbers with steps of 1 eV."""
    values = [int(value) for value in curve(start + np.arange(points), scale)]
    return WriterBlock(values, start=start, **fields)


def read(folder: Path, file: WriterFile, **settings: Any) -> tuple[Any, ...]:
    return read_spectra(write(folder, render(file), "file.vms"), **settings)


def without_name(spectrum: Any) -> str:
    return spectrum.name.rpartition("file.vms")[2]


# ---------------------------------------------------------------- the measured survey


def test_measured_platinum_survey() -> None:
    """What the file's own lines say (tests/data/README.md): the start, increment and count stand in it."""
    path = DATA / "pt111_derivative.vms"
    spectra = read_spectra(path)
    assert len(spectra) == 1
    (window,) = spectra[0].windows
    assert spectra[0].kind == "derivative"
    assert spectra[0].warnings == ()
    assert spectra[0].sha256 == hashlib.sha256(path.read_bytes()).hexdigest()
    assert window.energy_ev.size == 1100
    assert window.step_ev == pytest.approx(1.983673)
    assert window.energy_ev[0] == pytest.approx(19.989319)
    assert window.range_ev[1] == pytest.approx(2200, abs=1)
    values = path.read_text().splitlines()[-1101:-1]
    np.testing.assert_array_equal(window.intensity, np.array(values, dtype=float))
    high = window.energy_ev > 1000
    assert window.energy_ev[high][np.argmin(window.intensity[high])] == pytest.approx(1636.7, abs=0.1)  # the spike
    header = spectra[0].header
    assert (header.technique, header.dwell_s, header.sweeps, header.beam_kev) == ("AES diff", 0.503, 1, None)
    assert (header.instrument, header.operator, header.pass_energy) == (None, None, None)
    assert header.acquired == "2022-05-26T15:00:46+00:00"


@pytest.mark.parametrize("lines", [5, 20, 60, 82, 90, 500, 1150])
def test_truncated_survey(tmp_path: Path, lines: int) -> None:
    text = "\n".join((DATA / "pt111_derivative.vms").read_text().splitlines()[:lines])
    with pytest.raises(InputError, match="truncated; export the file again") as caught:
        read_spectra(write(tmp_path, text))
    assert caught.value.line is not None and caught.value.line <= lines


# ---------------------------------------------------------------- layout


@pytest.mark.parametrize("technique", ["AES dir", "AES diff"])
@pytest.mark.parametrize("mode", ALL_MODES)
def test_every_experiment_mode(tmp_path: Path, mode: str, technique: str) -> None:
    """The conditional items (10, 13, 17, 18, 23, 37) are stepped over in every mode."""
    file = WriterFile([region(technique=technique), region(300, technique=technique)], mode=mode)
    (spectrum,) = read(tmp_path, file)
    assert spectrum.kind == ("derivative" if technique == "AES diff" else "direct")
    assert spectrum.ranges_ev == ((100, 139), (300, 339))
    np.testing.assert_array_equal(spectrum.windows[1].intensity, file.blocks[1].values)


def test_irregular_scan(tmp_path: Path) -> None:
    """In IRREGULAR mode the first variable is the abscissa, and item 31 is absent."""
    energy = np.concatenate([axis(60, 90, 0.5), axis(270, 300, 1.0)])
    values = [value for pair in zip(energy.tolist(), curve(energy).tolist(), strict=True) for value in pair]
    block = WriterBlock(values, variables=[("kinetic energy", "eV"), ("counts", "d")])
    (spectrum,) = read(tmp_path, WriterFile([block], scan="IRREGULAR"))
    assert spectrum.ranges_ev == ((60, 90), (270, 300))
    np.testing.assert_array_equal(np.concatenate([w.intensity for w in spectrum.windows]), curve(energy))


def test_header_is_filled(tmp_path: Path) -> None:
    file = WriterFile([region(comments=["as received"])], comments=["run 7"])
    (spectrum,) = read(tmp_path, file)
    header = spectrum.header
    assert (header.sample, header.institution, header.instrument) == ("coupon", "institute", "analyser")
    assert (header.operator, header.experiment, header.technique) == ("operator", "trial", "AES dir")
    assert (header.beam_kev, header.analyser_mode, header.pass_energy) == (5.0, "FRR", 4.0)
    assert (header.dwell_s, header.sweeps, header.comments) == (0.05, 2, ("run 7", "as received"))
    assert header.acquired == "2021-03-04T10:20:30+01:00"
    assert spectrum.counts is True


def test_what_is_not_specified_is_none(tmp_path: Path) -> None:
    block = region(
        sample_id="Not Specified", date=("1E37",) * 7, source_energy="1E+37", analyser_mode="",
        pass_energy="1e37", dwell="1E37", scans="1E37",
    )  # fmt: skip
    file = WriterFile([block], institution="Not Specified", instrument="", operator="not specified", experiment=" ")
    (spectrum,) = read(tmp_path, file)
    assert replace(spectrum.header, technique=None) == type(spectrum.header)()


@pytest.mark.parametrize(
    ("date", "expected"),
    [((2021, 3, 4, 10, 20, 30, -5), "2021-03-04T10:20:30-05:00"),
     ((2021, 3, 4, 10, 20, 30, "1E37"), "2021-03-04T10:20:30"),
     ((2021, 13, 4, 10, 20, 30, 0), None),
     ((-1, -1, -1, -1, -1, -1, 0), None)],
)  # fmt: skip
def test_time_of_recording(tmp_path: Path, date: tuple[Any, ...], expected: str | None) -> None:
    (spectrum,) = read(tmp_path, WriterFile([region(date=date)]))
    assert spectrum.header.acquired == expected


def test_source_energy_that_cannot_be(tmp_path: Path) -> None:
    (spectrum,) = read(tmp_path, WriterFile([region(source_energy=3)]))
    assert spectrum.header.beam_kev is None
    assert "give the beam energy" in spectrum.warnings[0]


@pytest.mark.parametrize(
    "listed", [[1, 2, 3, 14, 21], [9, 12, 22, 27, 30], [31], [32, 33, 34], [8, 40], list(range(1, 41))]
)
def test_exclusion_list(tmp_path: Path, listed: list[int]) -> None:
    """Items left out take the value of the first block."""
    first = region(comments=["one", "two"], extra=[("gain", "d", 5), ("slit", "d", 2)])
    second = replace(first, sample_id="other")
    spectra = read(tmp_path, WriterFile([first, second], listed=listed))
    assert [spectrum.header.sample for spectrum in spectra] == ["coupon", "other"]
    assert spectra[0].ranges_ev == spectra[1].ranges_ev == ((100, 139),)
    assert replace(spectra[1].header, sample="coupon") == spectra[0].header


@pytest.mark.parametrize("listed", [[31], [1, 2, 3, 31], [9, 31, 35], list(range(1, 41))])
def test_inclusion_list(tmp_path: Path, listed: list[int]) -> None:
    """Only listed items stand in the blocks after the first; here the abscissa is one of them."""
    file = WriterFile(
        [region(extra=[("gain", "d", 5)]), region(300, extra=[("gain", "d", 5)])],
        listed=listed,
        excluded=False,
    )
    (spectrum,) = read(tmp_path, file)
    assert spectrum.ranges_ev == ((100, 139), (300, 339))


def test_manual_items_are_stepped_over(tmp_path: Path) -> None:
    assert len(read(tmp_path, WriterFile([region()], manual=["3", "5"]))) == 1


@pytest.mark.parametrize("which", ["future_experiment", "future_block"])
def test_future_upgrade_entries_are_refused(tmp_path: Path, which: str) -> None:
    with pytest.raises(InputError, match=r"future-upgrade .* entries.*export the file without them"):
        read(tmp_path, replace(WriterFile([region()]), **{which: 2}))


@pytest.mark.parametrize("end", ["\r\n", "\r"])
def test_other_line_ends(tmp_path: Path, end: str) -> None:
    text = render(WriterFile([region()])).replace("\n", end)
    assert read_spectrum(write(tmp_path, text.encode("utf-8-sig"))).ranges_ev == ((100, 139),)


def test_no_closing_line_is_said(tmp_path: Path) -> None:
    (spectrum,) = read(tmp_path, WriterFile([region()], end=""))
    assert "closing line" in spectrum.warnings[0]


def test_descending_scan(tmp_path: Path) -> None:
    block = region()
    back = replace(block, values=block.values[::-1], start=139, increment=-1)
    (spectrum,) = read(tmp_path, WriterFile([back]))
    assert spectrum.ranges_ev == ((100, 139),)
    np.testing.assert_array_equal(spectrum.windows[0].intensity, block.values)


# ---------------------------------------------------------------- which blocks are one spectrum (the interface)


def test_repeats_are_summed(tmp_path: Path) -> None:
    file = WriterFile([region(scale=scale, block_id=f"sweep {scale}") for scale in (1, 2, 3)])
    (spectrum,) = read(tmp_path, file)
    np.testing.assert_array_equal(spectrum.windows[0].intensity, np.sum([b.values for b in file.blocks], axis=0))
    assert spectrum.header.sweeps == 6  # three blocks of two scans
    assert "3 recordings" in spectrum.warnings[0]
    assert [without_name(each) for each in read(tmp_path, file, separate=True)] == ["#1", "#2", "#3"]


@pytest.mark.parametrize("mode", ["SDP", "MAPDP"])
@pytest.mark.parametrize("variable", [True, False])
def test_levels_of_a_depth_profile_stay_apart(tmp_path: Path, mode: str, variable: bool) -> None:
    """Two regions at each of three levels, with or without a variable that says the level."""
    blocks = [
        region(start, scale=1 + level, experimental=[30 * level] if variable else [])
        for level in range(3)
        for start in (100, 300)
    ]
    variables = [("etch time", "s")] if variable else []
    spectra = read(tmp_path, WriterFile(blocks, mode=mode, variables=variables))
    assert [without_name(spectrum) for spectrum in spectra] == ["", "#2", "#3"]
    assert all(spectrum.ranges_ev == ((100, 139), (300, 339)) for spectrum in spectra)
    np.testing.assert_array_equal(spectra[2].windows[1].intensity, blocks[5].values)
    assert all(spectrum.warnings == () for spectrum in spectra)


@pytest.mark.parametrize(("label", "spectra"), [("tilt", 2), ("sweep number", 1)])
def test_variables_of_an_ordinary_experiment(tmp_path: Path, label: str, spectra: int) -> None:
    blocks = [region(experimental=[at]) for at in (1, 2)]
    assert len(read(tmp_path, WriterFile(blocks, variables=[(label, "d")]))) == spectra


@pytest.mark.parametrize(
    "second",
    [{"sample_id": "other"}, {"technique": "AES diff"}, {"block_id": "spot 2"}, {"block_id": "etch 30 s"}],
)
def test_what_keeps_blocks_apart(tmp_path: Path, second: dict[str, str]) -> None:
    first = region(block_id="spot 1") if "spot" in str(second) else region()
    spectra = read(tmp_path, WriterFile([first, region(300, **second)]))
    assert [spectrum.ranges_ev for spectrum in spectra] == [((100, 139),), ((300, 339),)]


def test_positions_of_a_map(tmp_path: Path) -> None:
    blocks = [region(start, xy=xy) for xy in ((1, 1), (1, 2)) for start in (100, 300)]
    spectra = read(tmp_path, WriterFile(blocks, mode="MAP"))
    assert [spectrum.header.location for spectrum in spectra] == ["x 1, y 1", "x 1, y 2"]
    assert len(spectra[1].windows) == 2


def test_first_of_several(tmp_path: Path) -> None:
    path = write(tmp_path, render(WriterFile([region(), region(sample_id="other")])))
    spectrum = read_spectrum(path)
    assert spectrum.name == str(path)
    assert spectrum.warnings[-1].startswith("the file holds 2 spectra")


def test_mixed_file_answers_for_its_auger_blocks(tmp_path: Path) -> None:
    blocks = [region(technique="XPS", label="binding energy"), region(300), region(500, technique="SIMS")]
    (spectrum,) = read(tmp_path, WriterFile(blocks))
    assert spectrum.ranges_ev == ((300, 339),)
    assert "2 of 3 blocks left out: technique SIMS and XPS" in spectrum.warnings[0]


def test_a_group_too_short_is_left_out_and_said(tmp_path: Path) -> None:
    spectra = read(tmp_path, WriterFile([region(), region(points=10, sample_id="other")]))
    assert len(spectra) == 1
    assert "only 10 points: left out" in spectra[0].warnings[0]


# ---------------------------------------------------------------- ordinates


def two_variables(second: str = "other counts") -> WriterBlock:
    first = curve(100 + np.arange(40.0))
    values = [int(value) for pair in zip(first, first + 5, strict=True) for value in pair]
    return WriterBlock(values, variables=[("counts", "d"), (second, "d")])


def test_corresponding_variables_are_columns(tmp_path: Path) -> None:
    path = write(tmp_path, render(WriterFile([two_variables()])))
    first = curve(100 + np.arange(40.0))
    assert list_columns(path) == ("counts", "other counts")
    spectrum = read_spectrum(path)
    np.testing.assert_array_equal(spectrum.windows[0].intensity, first)
    assert "--column picks another: 2 'other counts'" in spectrum.warnings[0]
    np.testing.assert_array_equal(read_spectrum(path, column="2").windows[0].intensity, first + 5)
    np.testing.assert_array_equal(read_spectrum(path, column="sum").windows[0].intensity, 2 * first + 5)


def test_transmission_is_no_ordinate(tmp_path: Path) -> None:
    (spectrum,) = read(tmp_path, WriterFile([two_variables("transmission function")]))
    assert spectrum.warnings == ()


@pytest.mark.parametrize(
    ("fields", "expected"),
    [({}, True), ({"variables": [("intensity", "c/s")]}, False), ({"signal_mode": "analogue"}, False),
     ({"signal_mode": "not specified"}, None), ({"technique": "AES diff"}, False)],
)  # fmt: skip
def test_counts(tmp_path: Path, fields: dict[str, Any], expected: bool | None) -> None:
    assert read(tmp_path, WriterFile([region(**fields)]))[0].counts is expected


def test_explicit_kind_overrules(tmp_path: Path) -> None:
    (spectrum,) = read(tmp_path, WriterFile([region()]), kind="derivative", ordinate="en")
    assert (spectrum.kind, spectrum.ordinate, spectrum.counts) == ("derivative", "en", False)


# ---------------------------------------------------------------- missing and wrong


def test_aborted_scan_is_cut_and_said(tmp_path: Path) -> None:
    block = region()
    block.values[30:] = ["1E37"] * 10
    (spectrum,) = read(tmp_path, WriterFile([block]))
    assert spectrum.ranges_ev == ((100, 129),)
    assert "10 missing values at the ends left out" in spectrum.warnings[0]


def test_value_missing_inside(tmp_path: Path) -> None:
    block = region()
    block.values[7] = "1E37"
    path = write(tmp_path, render(WriterFile([block])))
    with pytest.raises(InputError, match="missing inside the scan") as caught:
        read_spectra(path)
    assert path.read_text().splitlines()[(caught.value.line or 0) - 1] == "1E37"


@pytest.mark.parametrize(
    ("block", "message"),
    [
        (region(technique="XPS"), "holds XPS blocks only.*reads the techniques AES dir and AES diff"),
        (region(label="binding energy"), "axis is a binding energy.*give kinetic energies"),
        (region(unit="keV"), "in keV.*multiply the energies by 1000"),
        (region(label="etch time", unit="s"), "'etch time' in 's' is no energy"),
        (replace(region(), start="1E37"), "no start or no increment"),
        (region(increment=0), "no start or no increment"),
        (region(start=-20), "negative.*binding-energy axis"),
        (region(start=3490), "beyond 0 to 3500 eV"),
        (region(points=19), "only 19 points"),
        (WriterBlock([5] * 40), "signal is constant"),
        (WriterBlock([5, "abc"] * 20), "'abc' stands where an ordinate value should"),
        (WriterBlock([5, ""] * 20), "'' stands where an ordinate value should"),
        (WriterBlock(["1E37"] * 40), "holds no values"),
        (region(count=39), "stands after the last block"),
        (region(count=41), "'end of experiment' stands where an ordinate value should"),
        (region(count=4000), "truncated"),
        (region(date=("March", 3, 4, 5, 6, 7, 0)), r"'March' stands where item 1 \(year\) should be a number"),
        (replace(two_variables(), count=79), "do not go round"),
    ],
)  # fmt: skip
def test_bad_blocks(tmp_path: Path, block: WriterBlock, message: str) -> None:
    path = write(tmp_path, render(WriterFile([block])))
    with pytest.raises(InputError) as caught:
        read_spectra(path)
    text = str(caught.value)
    assert re.search(message, text) and text.startswith(str(path)) and "\n" not in text
    assert caught.value.remedy and caught.value.line


@pytest.mark.parametrize(
    ("fields", "message"),
    [
        ({"mode": "DEPTH"}, "'DEPTH' stands where the experiment mode should.*one of MAP, MAPDP"),
        ({"scan": "RANDOM"}, "'RANDOM' stands where the scan mode should"),
        ({"scan": "MAPPING"}, "scan mode MAPPING"),
        ({"listed": [41]}, "item number 41 is not between 1 and 40"),
        ({"blocks": []}, "holds no blocks"),
        ({"end": "and so on"}, "'and so on' stands after the last block"),
    ],
)
def test_bad_files(tmp_path: Path, fields: dict[str, Any], message: str) -> None:
    with pytest.raises(InputError, match=message):
        read(tmp_path, WriterFile(**{"blocks": [region()], **fields}))


def test_other_identifier(tmp_path: Path) -> None:
    text = render(WriterFile([region()])).replace("1988 May 4", "2030 June 1")
    with pytest.raises(InputError, match=r"line 1: the first line is not that of ISO 14976 .*must read"):
        read_spectra(write(tmp_path, text))


def test_count_of_comments_that_cannot_be(tmp_path: Path) -> None:
    """A count of a thousand million neither fills the memory nor takes long: it is a truncated file."""
    text = render(WriterFile([region(comments=["x"])])).replace("\n1\nx\n", "\n999999999\nx\n")
    with pytest.raises(InputError, match="truncated"):
        read_spectra(write(tmp_path, text))
