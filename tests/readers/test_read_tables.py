"""Text tables. The numbers are written by the test itself, so what is read back is known beforehand."""

from __future__ import annotations

import hashlib
import io
import os
import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest
from reader_files import axis, curve, rows, write

from ident.errors import InputError, SettingError
from ident.readers import list_columns, read_spectra, read_spectrum

ENERGY = axis(100, 150, 0.5)
COUNTS = curve(ENERGY)


def assert_is_curve(spectrum, energy=ENERGY, counts=COUNTS) -> None:
    assert len(spectrum.windows) == 1
    np.testing.assert_allclose(spectrum.windows[0].energy_ev, energy, rtol=1e-9)
    np.testing.assert_allclose(spectrum.windows[0].intensity, counts, rtol=1e-9)


@pytest.mark.parametrize("separator", [",", ";", "\t", " ", "   ", ", ", " ; ", " \t "])
def test_every_separator(tmp_path: Path, separator: str) -> None:
    assert_is_curve(read_spectrum(write(tmp_path, rows(ENERGY, COUNTS, separator=separator))))


@pytest.mark.parametrize("separator", [";", "\t", " ", "; "])
def test_decimal_comma(tmp_path: Path, separator: str) -> None:
    text = rows(ENERGY, COUNTS / 8, separator=separator, decimal=",")
    assert_is_curve(read_spectrum(write(tmp_path, text)), counts=COUNTS / 8)


def test_quoted_decimal_comma(tmp_path: Path) -> None:
    lines = [
        f'"{energy:.1f}","{value:.2f}"'.replace(".", ",") for energy, value in zip(ENERGY, COUNTS / 4, strict=True)
    ]
    assert_is_curve(read_spectrum(write(tmp_path, "\n".join(lines))), counts=COUNTS / 4)


@pytest.mark.parametrize("end", ["\n", "\r\n", "\r", "\r\r\n"])
def test_every_line_end(tmp_path: Path, end: str) -> None:
    assert_is_curve(read_spectrum(write(tmp_path, rows(ENERGY, COUNTS).replace("\n", end))))


def test_mixed_line_ends(tmp_path: Path) -> None:
    lines = rows(ENERGY, COUNTS).splitlines()
    text = "".join(line + ("\n", "\r\n", "\r")[at % 3] for at, line in enumerate(lines))
    assert_is_curve(read_spectrum(write(tmp_path, text)))


@pytest.mark.parametrize("encoding", ["utf-8", "utf-8-sig", "utf-16", "utf-16-le", "utf-16-be", "utf-32"])
def test_every_encoding(tmp_path: Path, encoding: str) -> None:
    text = "Energy (eV)\tIntensity\n" + rows(ENERGY, COUNTS, separator="\t")
    assert_is_curve(read_spectrum(write(tmp_path, text.encode(encoding))))


def test_latin_1_remarks(tmp_path: Path) -> None:
    text = "# Probe: Stahl, geätzt 5 µm\n" + rows(ENERGY, COUNTS)
    spectrum = read_spectrum(write(tmp_path, text.encode("latin-1")))
    assert_is_curve(spectrum)
    assert "geätzt 5 µm" in spectrum.header.comments[0]


@pytest.mark.parametrize(
    "head",
    [
        "# a remark\n",
        "% a remark\n% 20 30 of them\n",
        "; a remark\n",
        '"Energy (eV)","Counts"\n',
        "Energy (eV) Counts\n",
        "E;N\n",
        "Survey of a coupon, second trial\n\nEnergy   Counts\neV   counts\n",
        "Points: 101\nDwell 0.05 s\n",
        "Scans 3\nRange 100 to 150\n\n",
    ],
)
def test_headers_are_passed_over(tmp_path: Path, head: str) -> None:
    assert_is_curve(read_spectrum(write(tmp_path, head + rows(ENERGY, COUNTS))))


def test_remarks_among_and_after_the_rows(tmp_path: Path) -> None:
    lines = rows(ENERGY, COUNTS).splitlines()
    lines[3] += "   # a door was slammed"
    assert_is_curve(read_spectrum(write(tmp_path, "\n".join([*lines, "", "end of data"]))))


def test_descending_energies(tmp_path: Path) -> None:
    assert_is_curve(read_spectrum(write(tmp_path, rows(ENERGY[::-1], COUNTS[::-1]))))


def test_trailing_empty_columns_are_no_error(tmp_path: Path) -> None:
    text = rows(ENERGY, COUNTS, separator=",").replace("\n", ",,\n")
    assert_is_curve(read_spectrum(write(tmp_path, text)))
    assert list_columns(tmp_path / "spectrum.txt") == ("column 1", "column 2")


def test_blank_line_between_all_rows(tmp_path: Path) -> None:
    assert_is_curve(read_spectrum(write(tmp_path, rows(ENERGY, COUNTS).replace("\n", "\n\n"))))


def test_fortran_exponents_and_unicode_minus(tmp_path: Path) -> None:
    values = COUNTS - 2100
    lines = [f"{energy:.3E} {value:.4E}".replace("E", "D") for energy, value in zip(ENERGY, values, strict=True)]
    spectrum = read_spectrum(write(tmp_path, "\n".join(lines).replace("-2", "\u22122")))
    assert_is_curve(spectrum, counts=np.array([float(f"{value:.4E}") for value in values]))


def test_sha256_and_name(tmp_path: Path) -> None:
    path = write(tmp_path, rows(ENERGY, COUNTS))
    spectrum = read_spectrum(path)
    assert spectrum.sha256 == hashlib.sha256(path.read_bytes()).hexdigest()
    assert spectrum.name == str(path)


def test_suffix_says_nothing(tmp_path: Path) -> None:
    assert_is_curve(read_spectrum(write(tmp_path, rows(ENERGY, COUNTS), name="spectrum.vms")))


def test_standard_input() -> None:
    spectra = read_spectra("-", stream=io.BytesIO(rows(ENERGY, COUNTS).encode()))
    assert_is_curve(spectra[0])
    assert spectra[0].name == "-"


def test_real_standard_input() -> None:
    program = "from ident.readers import read_spectrum as r; print(r('-').windows[0].energy_ev.size)"
    root = Path(__file__).parents[2]
    done = subprocess.run(
        [sys.executable, "-c", program],
        input=rows(ENERGY, COUNTS).encode(),
        capture_output=True,
        cwd=root,
        check=True,
    )
    assert done.stdout.split() == [b"101"]


def test_named_pipe(tmp_path: Path) -> None:
    pipe = tmp_path / "pipe"
    os.mkfifo(pipe)
    with subprocess.Popen(["sh", "-c", f"printf '{rows(ENERGY, COUNTS)}' > '{pipe}'"]):
        assert_is_curve(read_spectrum(pipe))


# ---------------------------------------------------------------- thousands


def test_thousands_that_are_clear(tmp_path: Path) -> None:
    german = [f"{energy:.1f};{value:,.2f}".replace(",", "_").replace(".", ",").replace("_", ".")
              for energy, value in zip(ENERGY, COUNTS, strict=True)]  # fmt: skip
    assert "2.0" in german[0]  # 2.0xx,00: the trial holds what it is about
    assert_is_curve(read_spectrum(write(tmp_path, "\n".join(german))))
    english = [f"{energy:.1f}\t{value:,.2f}" for energy, value in zip(ENERGY, COUNTS, strict=True)]
    assert_is_curve(read_spectrum(write(tmp_path, "\n".join(english))))


def test_thousands_that_could_be_decimals_are_refused(tmp_path: Path) -> None:
    lines = [f"{energy:.0f};{value:,.0f}" for energy, value in zip(axis(100, 150, 1), axis(960, 1060, 2), strict=True)]
    with pytest.raises(InputError, match=r"could be 1000 or 1\.000.*without thousands separators"):
        read_spectrum(write(tmp_path, "\n".join(lines)))


def test_fixed_decimals_are_no_thousands(tmp_path: Path) -> None:
    lines = [f"{energy:.3f};{value / 100:.3f}".replace(".", ",") for energy, value in zip(ENERGY, COUNTS, strict=True)]
    assert_is_curve(read_spectrum(write(tmp_path, "\n".join(lines))), counts=COUNTS / 100)


def test_comma_as_separator_and_decimal_is_refused(tmp_path: Path) -> None:
    energy = axis(100, 160, 1.2)
    lines = [f"{a:.1f},{b:.1f}".replace(".", ",") for a, b in zip(energy, curve(energy) / 8, strict=True)]
    with pytest.raises(InputError, match="both the separator and the decimal sign; put semicolons"):
        read_spectrum(write(tmp_path, "\n".join(lines)))


# ---------------------------------------------------------------- columns

SWEEPS = "Energy [eV],Sweep 1,Sweep 2,Sweep 3\n" + rows(ENERGY, COUNTS, COUNTS + 1, COUNTS + 2, separator=",")


def test_sweeps_are_offered(tmp_path: Path) -> None:
    path = write(tmp_path, SWEEPS)
    assert list_columns(path) == ("Energy [eV]", "Sweep 1", "Sweep 2", "Sweep 3")
    spectrum = read_spectrum(path)
    assert_is_curve(spectrum)
    (warning,) = spectrum.warnings
    assert "'Sweep 1' was taken" in warning and "--column sum" in warning and "4 'Sweep 3'" in warning


@pytest.mark.parametrize("column", ["Sweep 2", "sweep2", " SWEEP 2 ", "3"])
def test_column_by_name_or_number(tmp_path: Path, column: str) -> None:
    spectrum = read_spectrum(write(tmp_path, SWEEPS), column=column)
    assert_is_curve(spectrum, counts=COUNTS + 1)
    assert spectrum.warnings == ()


def test_sweeps_are_summed(tmp_path: Path) -> None:
    assert_is_curve(read_spectrum(write(tmp_path, SWEEPS), column="sum"), counts=3 * COUNTS + 3)


def test_column_called_sum_comes_first(tmp_path: Path) -> None:
    text = "E (eV),s1,s2,Sum\n" + rows(ENERGY, COUNTS, COUNTS, COUNTS * 7, separator=",")
    assert_is_curve(read_spectrum(write(tmp_path, text), column="sum"), counts=COUNTS * 7)


def test_column_errors_name_the_columns(tmp_path: Path) -> None:
    path = write(tmp_path, SWEEPS)
    with pytest.raises(InputError, match=r"has no column 'counts'.*2 'Sweep 1'"):
        read_spectrum(path, column="counts")
    with pytest.raises(InputError, match="several columns fit 'sweep'"):
        read_spectrum(path, column="sweep")
    with pytest.raises(InputError, match="holds the energies"):
        read_spectrum(path, column="1")


def test_errors_and_times_are_no_ordinates(tmp_path: Path) -> None:
    text = "Time (s);Energy (eV);Error;Intensity\n" + rows(ENERGY * 0 + 7, ENERGY, COUNTS**0.5, COUNTS, separator=";")
    spectrum = read_spectrum(write(tmp_path, text))
    assert_is_curve(spectrum)
    assert spectrum.warnings == ()


def test_unnamed_columns_say_which_was_taken(tmp_path: Path) -> None:
    spectrum = read_spectrum(write(tmp_path, rows(ENERGY, COUNTS, COUNTS / 2)))
    assert_is_curve(spectrum)
    assert "'column 2' was taken" in spectrum.warnings[0] and "'column 3'" in spectrum.warnings[0]


def test_numbers_of_rows_are_no_energies(tmp_path: Path) -> None:
    spectrum = read_spectrum(write(tmp_path, rows(np.arange(1, ENERGY.size + 1), ENERGY, COUNTS)))
    assert_is_curve(spectrum)
    assert "column 2 was taken as the energy" in spectrum.warnings[0]


def test_pairs_of_energy_and_ordinate(tmp_path: Path) -> None:
    second = axis(300, 330, 0.5)
    lines = ["E1 (eV),N1,E2 (eV),N2"]
    lines = ["Energy,N1,Energy,N2"]
    for at in range(ENERGY.size):
        pair = f"{second[at]},{curve(second)[at]}" if at < second.size else ","
        lines.append(f"{ENERGY[at]},{COUNTS[at]},{pair}")
    path = write(tmp_path, "\n".join(lines))
    assert_is_curve(read_spectrum(path))
    assert_is_curve(read_spectrum(path, column="N2"), second, curve(second))
    with pytest.raises(InputError, match="energies of their own"):
        read_spectrum(path, column="sum")


def test_units_of_their_own_line(tmp_path: Path) -> None:
    path = write(tmp_path, "Kinetic energy\tIntensity\neV\tcounts/s\n" + rows(ENERGY, COUNTS, separator="\t"))
    assert list_columns(path) == ("Kinetic energy [eV]", "Intensity [counts/s]")


# ---------------------------------------------------------------- what the words say


@pytest.mark.parametrize("word", ["dN/dE", "dN(E)/dE", "d(E*N(E))/dE", "derivative", "Differentiated signal"])
def test_derivative_by_header_word(tmp_path: Path, word: str) -> None:
    text = f"Energy (eV),{word}\n" + rows(ENERGY, COUNTS - 2100, separator=",")
    assert read_spectrum(write(tmp_path, text)).kind == "derivative"
    assert read_spectrum(tmp_path / "spectrum.txt", kind="direct").kind == "direct"


@pytest.mark.parametrize("remark", ["differential pumping on", "not differentiated", "derivative: no", "N(E)"])
def test_words_that_do_not_mean_derivative(tmp_path: Path, remark: str) -> None:
    assert read_spectrum(write(tmp_path, f"# {remark}\n" + rows(ENERGY, COUNTS))).kind == "auto"


def test_kind_follows_the_chosen_column(tmp_path: Path) -> None:
    path = write(tmp_path, "Energy,N(E),dN/dE\n" + rows(ENERGY, COUNTS, COUNTS - 2100, separator=","))
    assert read_spectrum(path).kind == "auto"
    assert read_spectrum(path).ordinate == "n"
    assert read_spectrum(path, column="dn/de").kind == "derivative"


def test_ordinate_word(tmp_path: Path) -> None:
    path = write(tmp_path, "Energy,E*N(E)\n" + rows(ENERGY, COUNTS, separator=","))
    assert read_spectrum(path).ordinate == "en"
    assert read_spectrum(path, ordinate="n").ordinate == "n"


@pytest.mark.parametrize(
    ("name", "factor", "expected"),
    [("Counts", 1, True), ("Counts (c/s)", 1, False), ("cps", 1, False), ("Intensity", 1, None),
     ("Counts", 0.37, None), ("Normalised intensity", 0.001, False)],
)  # fmt: skip
def test_counts(tmp_path: Path, name: str, factor: float, expected: bool | None) -> None:
    text = f"Energy (eV);{name}\n" + rows(ENERGY, COUNTS * factor, separator=";")
    assert read_spectrum(write(tmp_path, text)).counts is expected


def test_header_fields(tmp_path: Path) -> None:
    head = "# Sample: valve seat 3\n# Beam energy = 5 keV\n# Operator: N. N.\n# Date: 2023-05-06 07:08:09\n"
    header = read_spectrum(write(tmp_path, head + rows(ENERGY, COUNTS))).header
    assert (header.sample, header.beam_kev, header.operator) == ("valve seat 3", 5.0, "N. N.")
    assert header.acquired == "2023-05-06T07:08:09"
    assert len(header.comments) == 4


@pytest.mark.parametrize(
    ("line", "kev"), [("Beam voltage: 3000 V", 3.0), ("primary energy (keV): 10", None), ("Beam: 10kV", 10.0)]
)
def test_beam_energy(tmp_path: Path, line: str, kev: float | None) -> None:
    header = read_spectrum(write(tmp_path, f"# {line}\n" + rows(ENERGY, COUNTS))).header
    assert header.beam_kev == kev


@pytest.mark.parametrize(
    ("name", "expected"),
    [("N(E)", "n"), ("dN(E)/dE", "n"), ("E * N(E)", "en"), ("EN(E)", "en"), ("E\u00b7N(E)", "en"),
     ("d(EN(E))/dE", "en"), ("Counts", "auto")],
)  # fmt: skip
def test_ordinate_is_told_by_its_name(tmp_path: Path, name: str, expected: str) -> None:
    text = f"Energy (eV);{name}\n" + rows(ENERGY, COUNTS, separator=";")
    assert read_spectrum(write(tmp_path, text)).ordinate == expected


def test_spots_are_no_sweeps(tmp_path: Path) -> None:
    path = write(tmp_path, "Energy (eV),Spot 1,Spot 2\n" + rows(ENERGY, COUNTS, COUNTS, separator=","))
    assert "sweeps" not in read_spectrum(path).warnings[0]


def test_long_lines_do_not_take_long(tmp_path: Path) -> None:
    """A header line of a megabyte is passed over; searching it for names would take hours."""
    assert_is_curve(read_spectrum(write(tmp_path, "x" + "(" * 1_000_000 + "\n" + rows(ENERGY, COUNTS))))


def test_unknown_setting() -> None:
    with pytest.raises(SettingError, match="auto, direct, derivative"):
        read_spectra("-", kind="second", stream=io.BytesIO(b""))  # type: ignore[arg-type]
