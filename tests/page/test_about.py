"""The TOML file that goes with a page: what it may say, and one helpful line for what it may not."""

from __future__ import annotations

from pathlib import Path

import pytest

from ident.errors import InputError
from ident.report.page import About, check_spectra, read_about
from ident.report.page.about import names


def read(tmp_path: Path, text: str) -> About:
    path = tmp_path / "about.toml"
    path.write_text(text, encoding="utf-8")
    return read_about(path)


def test_an_empty_file_says_nothing(tmp_path: Path) -> None:
    about = read(tmp_path, "")
    assert not about.report
    assert not about.decisions
    assert not about.spots


def test_dates_and_plain_numbers_are_taken(tmp_path: Path) -> None:
    about = read(tmp_path, "[report]\ndate = 2026-12-01\nsweeps = 4\nsample = 17\noperator = ' Ada '\ndwell = ''\n")
    assert about.report == {"date": "2026-12-01", "sweeps": "4", "sample": "17", "operator": "Ada"}


def test_elements_are_read_as_everywhere(tmp_path: Path) -> None:
    about = read(tmp_path, '[analyst.titanum]\ndecision = "accepted"\n[analyst.sulfur]\nremark = "grease"\n')
    assert [d.element for d in about.decisions] == ["Ti", "S"]


def test_what_is_said_of_one_spectrum_goes_before_what_holds_for_all(tmp_path: Path) -> None:
    about = read(
        tmp_path,
        '[report]\nbeam_current = "10 nA"\n[[spot]]\nname = "pit"\nspectrum = "b.csv"\nbeam_current = "20 nA"\n'
        '[[analyst.Cu]]\ndecision = "accepted"\n[[analyst.Cu]]\ndecision = "overruled"\nspectrum = "b.csv"\n',
    )
    assert about.report_of("data/a.csv") == {"beam_current": "10 nA"}
    assert about.report_of("data/b.csv") == {"beam_current": "20 nA", "spot": "pit"}
    assert about.decisions_on("data/a.csv")["Cu"].decision == "accepted"
    assert about.decisions_on("data/b.csv")["Cu"].decision == "overruled"


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("[report]\noperater = 'x'", "did you mean 'operator'?"),
        ("[report]\nanalyzer_mode = 'FRR'", "did you mean 'analyser_mode'?"),
        ("[reports]\nsample = 'x'", "did you mean 'report'?"),
        ("[report]\nzzz = 'x'", "sample"),
        ("[report]\nbeam_current = 10", "no unit"),
        ("[report]\nincidence = true", "no text"),
        ("[report]\noperator = ['a']", "no text"),
        ("report = 3", "no table"),
        ("[analyst.Cu]\ndecision = 'yes'", 'write decision = "accepted" or "overruled"'),
        ("[analyst.Cu]\ncomment = 'x'", "is not an entry of"),
        ("[analyst.Qq]\nremark = 'x'", "no element"),
        ("[analyst.hydrogen]\ndecision = 'accepted'", "no Auger transition"),
        ("[analyst.Cu]\nremark = 'x'\n[analyst.copper]\nremark = 'y'", "twice"),
        ("[analyst]\nCu = 'accepted'", "no table"),
        ("[[spot]]\nx = 1\ny = 2", "no name"),
        ("[[spot]]\nname = 'a'\nx = 0.5", "lies nowhere"),
        ("[[spot]]\nname = 'a'\nx = -4\ny = 3", "lies nowhere"),
        ("[[spot]]\nname = 'a'\nx = nan\ny = 3", "lies nowhere"),
        ("[[spot]]\nname = 'a'\nx = 0.5\ny = 120", "one place in pixels"),
        ("[[spot]]\nname = 'a'\ncolour = 'red'", "is not an entry of"),
        ("[[spot]]\nname = 'a'\noperator = 'x'", "no spectrum"),
        ("[spot]\nname = 'a'", "no table"),
        ("[report\nsample = 'x'", "no TOML"),
        ("[report]\nsample = 'x'\nsample = 'y'", "no TOML"),
    ],
)
def test_what_means_nothing_is_one_line_with_file_and_remedy(tmp_path: Path, text: str, said: str) -> None:
    with pytest.raises(InputError) as failed:
        read(tmp_path, text)
    assert said in str(failed.value)
    assert "about.toml" in str(failed.value)
    assert "\n" not in str(failed.value)


@pytest.mark.parametrize("raw", [b"\xff\xfe[report]", b"#" * 1_000_001, b"a = " + b"[" * 100_000])
def test_what_is_no_small_text_is_refused(tmp_path: Path, raw: bytes) -> None:
    path = tmp_path / "about.toml"
    path.write_bytes(raw)
    with pytest.raises(InputError):
        read_about(path)


def test_a_file_that_is_not_there_or_is_a_folder(tmp_path: Path) -> None:
    for path in (tmp_path / "nothing.toml", tmp_path):
        with pytest.raises(InputError, match="cannot be read"):
            read_about(path)


@pytest.mark.parametrize(
    ("told", "spectrum", "same"),
    [
        ("part.csv", "data/part.csv", True),
        ("part.csv", "part.csv#2", True),
        ("part.csv#2", "data/part.csv#2", True),
        ("part.csv#1", "data/part.csv#2", False),
        ("data/part.csv", "more/data/part.csv", True),
        ("art.csv", "part.csv", False),
        ("part.csv", "data\\part.csv", True),
    ],
)
def test_a_name_means_a_spectrum(told: str, spectrum: str, same: bool) -> None:
    assert names(told, spectrum) is same


def test_entries_about_other_files_are_refused(tmp_path: Path) -> None:
    about = read(tmp_path, '[[spot]]\nname = "pit"\nspectrum = "prt.csv"\n')
    with pytest.raises(InputError, match=r"did you mean 'part\.csv'"):
        check_spectra(about, ["data/part.csv", "data/lid.csv"])
    about = read(tmp_path, '[analyst.Cu]\nremark = "x"\nspectrum = "part.csv#2"\n')
    check_spectra(about, ["data/part.csv"])
    with pytest.raises(InputError, match="names 2 inputs"):
        check_spectra(about, ["a/part.csv", "b/part.csv"])
