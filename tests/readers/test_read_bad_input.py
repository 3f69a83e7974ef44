"""Bad input: one line that names the file, the line where there is one, and what would work."""

from __future__ import annotations

import contextlib
import io
import os
from pathlib import Path

import numpy as np
import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st
from iso14976_writer import WriterBlock, WriterFile, render
from reader_files import axis, curve, rows, write

from ident.errors import InputError
from ident.readers import list_columns, read_spectra, read_spectrum

ENERGY = axis(100, 150, 0.5)
GOOD = rows(ENERGY, curve(ENERGY))
FAR = axis(3000, 4000, 2)
LINES = GOOD.splitlines()


def with_line(number: int, text: str) -> str:
    """The good table with one line replaced."""
    return "\n".join([*LINES[: number - 1], text, *LINES[number:]])


CASES = {
    "empty": ("", "is empty", None),
    "only blanks": (" \n\t\n", "is empty", None),
    "byte-order mark only": (b"\xef\xbb\xbf", "is empty", None),
    "prose": ("To whom it may concern:\nno numbers here.\n", "no table of numbers", 1),
    "prose with numbers": ("of 100 parts 3 or 4 failed\n| it took 5 days and 6 more for 7 |\n" * 15, "no table", 1),
    "one column": ("\n".join(str(value) for value in curve(ENERGY)), "only one column of numbers", 1),
    "NaN ordinate": (with_line(7, "103.0 NaN"), "'NaN' in column 2 is not a finite number", 7),
    "NaN energy": (with_line(7, "nan 2000"), "'nan' in column 1 is not a finite number", 7),
    "NaN in the first row": (with_line(1, "NaN 2000"), "'NaN' in column 1 is not", 1),
    "NaN in the last row": (with_line(101, "150 nan"), "'nan' in column 2 is not", 101),
    "infinite": (with_line(7, "103.0 -inf"), "'-inf' in column 2 is not", 7),
    "overflow": (with_line(7, "103.0 1e999"), "'1e999' in column 2 is not", 7),
    "mark for missing": (with_line(7, "103.0 1e37"), "1e+37 is more than any detector gives", 7),
    "letter for a digit": (with_line(7, "1O3.0 2000"), "'1O3.0' in column 1 is not", 7),
    "underscore": (with_line(7, "103.0 2_000"), "'2_000' in column 2 is not", 7),
    "word in a row": (with_line(7, "overload 2000"), "stands where a row of numbers should", 7),
    "row of words": (with_line(7, "detector overload"), "stands where a row of numbers should", 7),
    "cut short": (GOOD[: GOOD.rindex(" ")], "no value in column 2", 101),
    "hole": ("1,2\n" + with_line(7, "103.0,").replace(" ", ","), "no value in column 2", 8),
    "extra cell": (with_line(7, "103.0 2 000"), "3 cells where most rows have 2", 7),
    "constant": (rows(ENERGY, ENERGY * 0 + 42), "the signal is constant (42)", 1),
    "constant but for rounding": (rows(ENERGY, 0.1 + 1e-17 * ENERGY), "the signal is constant", 1),
    "19 points": ("\n".join(LINES[:19]), "only 19 points", 1),
    "negative": (rows(-ENERGY, curve(ENERGY)), "negative (-100), as on a binding-energy axis", 1),
    "keV": (rows(ENERGY / 1000, curve(ENERGY)), "in keV; multiply the energies by 1000", 1),
    "keV in the header": ("E (keV) N\n" + rows(ENERGY, curve(ENERGY)), "in keV ('E (keV)')", 1),
    "binding energy": ("\nBinding energy,N\n" + GOOD.replace(" ", ","), "the axis is a binding energy", 2),
    "BE": ("BE (eV),N\n" + GOOD.replace(" ", ","), "a binding energy ('BE (eV)')", 1),
    "binding in a remark": ("# x axis: binding energy, corrected\n" + GOOD, "speaks of binding energies", None),
    "unsorted": (with_line(7, "120.25 2000"), "the energy 120.25 eV is out of order", 7),
    "out of order at the low side": (with_line(7, "13 2000"), "the energy 13 eV is out of order", 7),
    "random order": ("\n".join(LINES[(at * 37) % 101] for at in range(101)), "in no order", None),
    "repeated": (with_line(7, LINES[5]), "the energy 102.5 eV is repeated", 7),
    "beyond 3500 eV": (rows(FAR, curve(FAR)), "3502 eV lies beyond 0 to 3500", 252),
    "binary": (bytes(range(256)) * 4, "is binary, not text", None),
    "spreadsheet": (b"PK\x03\x04" + b"\x00" * 60, "spreadsheet workbook", None),
    "compressed": (b"\x1f\x8b\x08\x00" + b"\x00" * 60, "compressed", None),
    "empty column": ("E,N,M\n" + "".join(f"{e},{e},\n" for e in ENERGY), "no column 'M'", None),
}  # fmt: skip


@pytest.mark.parametrize("case", CASES)
def test_bad_tables(tmp_path: Path, case: str) -> None:
    content, expected, line = CASES[case]
    path = write(tmp_path, content)
    with pytest.raises(InputError) as caught:
        read_spectrum(path, column="M" if case == "empty column" else None)
    message = str(caught.value)
    assert expected in message
    assert message.startswith(str(path)) and "\n" not in message
    assert caught.value.remedy
    if line is not None:
        assert caught.value.line == line


def test_remedy_for_binding_energies_and_kev(tmp_path: Path) -> None:
    with pytest.raises(InputError, match="give kinetic energies"):
        read_spectrum(write(tmp_path, rows(-ENERGY, curve(ENERGY))))
    with pytest.raises(InputError, match="multiply the energies by 1000"):
        read_spectrum(write(tmp_path, rows(ENERGY / 1000, curve(ENERGY))))


def test_beam_energy_in_kev_is_no_axis_in_kev(tmp_path: Path) -> None:
    assert read_spectrum(write(tmp_path, "# beam 5 keV\nEnergy (eV) N\n" + GOOD)).header.comments


def test_missing_file_directory_and_permission(tmp_path: Path) -> None:
    with pytest.raises(InputError, match="no such file; check the name"):
        read_spectra(tmp_path / "absent.txt")
    with pytest.raises(InputError, match="is a directory; name the files in it"):
        read_spectra(tmp_path)
    with pytest.raises(InputError, match="check the name"):
        read_spectra("a\x00b")
    with pytest.raises(InputError, match="check the name"):
        read_spectra("x" * 5000)
    with pytest.raises(InputError):
        read_spectra("")


def test_no_permission(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = write(tmp_path, GOOD)
    path.chmod(0)
    if os.access(path, os.R_OK):  # the superuser may read everything

        def refuse(*_: object, **__: object) -> None:
            raise PermissionError(13, "Permission denied")

        monkeypatch.setattr(Path, "open", refuse)
    with pytest.raises(InputError, match=r"spectrum.txt: no permission to read it; change its permissions"):
        read_spectra(path)


def test_closed_standard_input() -> None:
    stream = io.BytesIO(GOOD.encode())
    stream.close()
    with pytest.raises(InputError, match="standard input: cannot be read"):
        read_spectra("-", stream=stream)


def test_empty_standard_input_is_named_in_words() -> None:
    with pytest.raises(InputError, match=r"^standard input: is empty"):
        list_columns("-", stream=io.BytesIO(b""))


@pytest.mark.skipif(not Path("/dev/zero").exists(), reason="no such device here")
def test_a_device_without_end(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr("ident.readers.source.MAX_BYTES", 1024**2)
    with pytest.raises(InputError, match="longer than 1 MB"):
        read_spectra("/dev/zero")


# ---------------------------------------------------------------- fuzzing

ISO = render(
    WriterFile(
        [WriterBlock([int(v) for v in curve(axis(100, 129, 1))], experimental=[level]) for level in (0, 60)],
        mode="SDP",
        variables=[("etch time", "s")],
        comments=["trial"],
    )
)
IRREGULAR = render(
    WriterFile(
        [
            WriterBlock(
                [v for pair in zip(axis(50, 80, 1), curve(axis(50, 80, 1)), strict=True) for v in pair],
                variables=[("kinetic energy", "eV"), ("counts", "d")],
                technique="AES diff",
            )
        ],
        scan="IRREGULAR",
    )
)
TABLE = "Energy (eV);Sweep 1;Sweep 2\n" + rows(ENERGY, curve(ENERGY), curve(ENERGY) / 2, separator=";", decimal=",")
TOKENS = ["nan", "inf", "1E37", "-1", "", "1e999", "abc", "0", "9" * 12, "1e308", "\x00", "#", ",", ";", "\t", "\r",
          '"', "1.234,5", "keV", "binding", "\n\n", "\ufeff", "1_0", "\u0663"]  # fmt: skip


def read_or_refuse(data: bytes) -> None:
    """Any bytes give a spectrum or an InputError of one line, and nothing else."""
    for settings_ in ({}, {"separate": True, "column": "sum"}):
        try:
            spectra = read_spectra("-", stream=io.BytesIO(data), **settings_)
        except InputError as error:
            assert "\n" not in str(error) and str(error).startswith("standard input")
            assert error.remedy
        else:
            for spectrum in spectra:
                assert sum(window.energy_ev.size for window in spectrum.windows) >= 20
                assert all(np.isfinite(window.intensity).all() for window in spectrum.windows)
                assert all(0 <= low < high <= 3500 for low, high in spectrum.ranges_ev)
    with contextlib.suppress(InputError):
        assert all(isinstance(name, str) for name in list_columns("-", stream=io.BytesIO(data)))


@given(st.binary(max_size=400))
@settings(deadline=None, max_examples=150)
@example(b"\xff\xfe")
@example(b"\xff\xfe\x00")
@example(b"\x1a")
@example(b'"')
@example(b'1,"2\n3,4\n')
@example(b"VAMAS Surface")
@example(b"\r" * 5000)
def test_any_bytes(data: bytes) -> None:
    read_or_refuse(data)


@given(st.text(alphabet='0123456789.,;\t \n\r-+eE#"naNkV', max_size=600))
@settings(deadline=None, max_examples=150)
def test_any_text_of_numbers(text: str) -> None:
    read_or_refuse(text.encode())


@given(st.sampled_from([GOOD, TABLE, ISO, IRREGULAR]), st.floats(0, 1), st.sampled_from(["utf-8", "utf-16"]))
@settings(deadline=None, max_examples=150)
def test_any_truncation(text: str, part: float, encoding: str) -> None:
    data = text.encode(encoding)
    read_or_refuse(data[: int(part * len(data))])


@given(st.sampled_from([GOOD, TABLE, ISO, IRREGULAR]), st.data())
@settings(deadline=None, max_examples=250)
def test_any_mutation(text: str, data: st.DataObject) -> None:
    lines = text.split("\n")
    for _ in range(data.draw(st.integers(1, 4))):
        at = data.draw(st.integers(0, len(lines) - 1))
        token = data.draw(st.sampled_from(TOKENS))
        change = data.draw(st.sampled_from(["replace", "insert", "append", "delete", "double"]))
        if change == "delete" and len(lines) > 1:
            del lines[at]
        else:
            lines[at] = {
                "replace": token,
                "insert": token + lines[at],
                "append": lines[at] + token,
                "double": lines[at] + "\n" + lines[at],
            }.get(change, token)
    read_or_refuse("\n".join(lines).encode())


@given(st.integers(0, len(ISO) - 1))
@settings(deadline=None, max_examples=100)
def test_a_truncated_iso_14976_file_is_never_read_quietly(length: int) -> None:
    """Cut before the last value, the file is refused; in it or behind it, the missing end is warned of."""
    cut = ISO[:length]
    if cut.count("\n") < ISO.count("\n") - 2:
        with pytest.raises(InputError):
            read_spectra("-", stream=io.BytesIO(cut.encode()))
        return
    with contextlib.suppress(InputError):
        read = read_spectra("-", stream=io.BytesIO(cut.encode()))
        assert cut.rstrip().endswith("end of experiment") or any(spectrum.warnings for spectrum in read)


def test_rows_at_zero_energy_are_left_out_with_a_warning(tmp_path: Path) -> None:
    # No electron arrives at 0 eV; some programs write the axis from there all the same (common practice, no source).
    path = tmp_path / "from_zero.csv"
    path.write_text("\n".join(f"{energy},{1000 + energy % 7}" for energy in range(120)), encoding="utf-8")
    (spectrum,) = read_spectra(path)
    assert spectrum.windows[0].energy_ev[0] == 2.0
    assert any("2 eV left out" in text for text in spectrum.warnings)
