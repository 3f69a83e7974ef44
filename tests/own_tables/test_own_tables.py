"""`--tables DIR`: own rows over the shipped ones, said in every answer, refused when malformed."""

from __future__ import annotations

import csv
import io
import json
from collections.abc import Iterator
from pathlib import Path

import pytest

from ident import candidates_at, element_card, tables
from ident.errors import TableError
from tests.program import Run, one_error_line

DEMO = Path(__file__).resolve().parents[2] / "demo_spectra"
HEAD = (tables.reference_folder() / "lines.csv").read_text(encoding="utf-8").splitlines()[0]
MOVED = "Al,13,KL23L23,KL23L23,1300.0,1.0,published,0.9,0.5,published,0,element,memory"
ADDED = "Mo,42,M23N1N45,M23N1N45,150.0,2.0,published,0.4,0.5,published,0,element,bench2026"
SOURCES = 'key,text,doi\nbench2026,"own bench, 2026",\n'


@pytest.fixture(autouse=True)
def shipped_again() -> Iterator[None]:
    yield
    tables.use_tables(None)


@pytest.fixture
def own(tmp_path: Path) -> Path:
    folder = tmp_path / "own"
    folder.mkdir()
    (folder / "lines.csv").write_text("\n".join([HEAD, MOVED, ADDED]) + "\n", encoding="utf-8")
    (folder / "sources.csv").write_text(SOURCES, encoding="utf-8")
    return folder


def aluminium_ev() -> float:
    return next(line.energy_ev for line in tables.lines_of("Al") if line.transition == "KL23L23")


def test_a_row_of_the_same_key_replaces_and_others_are_added(own: Path) -> None:
    before, count = aluminium_ev(), len(tables.read_lines())
    tables.use_tables(own)
    assert aluminium_ev() == 1300.0
    assert len(tables.read_lines()) == count + 1
    used = tables.own_tables()
    assert used is not None
    assert [(file.name, file.replaced, file.added) for file in used.files] == [
        ("lines.csv", 1, 1),
        ("sources.csv", 0, 1),
    ]
    tables.use_tables(None)
    assert aluminium_ev() == before
    assert len(tables.read_lines()) == count
    assert tables.own_tables() is None


def test_whoever_asked_before_is_told_anew(own: Path) -> None:
    """What was made of the shipped tables must not outlive them, in whatever order the questions come."""
    first = [c.element for c in candidates_at(1300.0)]
    assert "Al" not in first
    tables.use_tables(own)
    assert any(c.element == "Al" for c in candidates_at(1300.0))
    assert any(line.transition == "M23N1N45" for line in element_card("Mo").lines)
    tables.use_tables(None)
    assert [c.element for c in candidates_at(1300.0)] == first


def test_the_matcher_looks_where_the_own_line_stands(run: Run, own: Path) -> None:
    def aluminium(*words: object) -> dict[str, float]:
        out = run("assign", "--format", "json", "--expect", "Al,Au", *words, DEMO / "bond_pad_lifted.txt")[1]
        lines = next(a for a in json.loads(out)["assignments"] if a["element"] == "Al")["lines"]
        return {line["transition"]: line["expected_ev"] for line in lines}

    assert aluminium()["KL23L23"] == pytest.approx(1390, abs=6)
    assert aluminium("--tables", own).get("KL23L23", 1300.0) == pytest.approx(1300, abs=12)
    assert aluminium()["KL23L23"] == pytest.approx(1390, abs=6)  # the next call is on the shipped tables again


@pytest.mark.parametrize(
    "words",
    [
        ("at", "1396"),
        ("element", "Mo"),
        ("assign", str(DEMO / "slip_ring_dead.csv")),
        ("recheck", str(DEMO / "slip_ring_dead.csv"), str(DEMO / "slip_ring_dead_labels.csv")),
        ("scale", "--metal", f"Cu={DEMO / 'copper_foil.csv'}"),
        ("tables",),
    ],
)
def test_every_answer_says_so(run: Run, own: Path, words: tuple[str, ...]) -> None:
    said = "lines.csv 1 replaced, 1 added"
    code, out, _ = run(words[0], "--tables", own, *words[1:])
    assert code == 0
    assert said in " ".join(out.split())
    assert said in run(words[0], "--tables", own, "--format", "json", *words[1:])[1]
    if words[0] not in {"scale", "tables"}:
        told = json.loads(run(words[0], "--tables", own, "--format", "json", *words[1:])[1].splitlines()[0])[
            "own_tables"
        ]
        assert told["files"][0] == {"name": "lines.csv", "replaced": 1, "added": 1}
    code, out, err = run(words[0], "--tables", own, "--format", "csv", *words[1:])
    assert said in out + err or words[0] == "tables"
    assert list(csv.reader(io.StringIO(out)))
    assert said not in run(*words)[1]


def test_own_sources_may_be_named_and_unknown_ones_are_refused(run: Run, own: Path) -> None:
    assert run("element", "--tables", own, "Mo")[0] == 0
    (own / "sources.csv").unlink()
    code, out, err = run("element", "--tables", own, "Mo")
    line = one_error_line(err)
    assert (code, out) == (1, "")
    for part in ("own/lines.csv", "line 3", "source", "bench2026", "sources.csv"):
        assert part in line


@pytest.mark.parametrize(
    ("name", "content", "parts"),
    [
        ("lines.csv", HEAD + "\n" + MOVED.replace("1300.0", "warm"), ("own/lines.csv", "line 2", "energy_ev", "warm")),
        ("lines.csv", HEAD + "\n" + MOVED.replace("Al,13", "Al,14"), ("own/lines.csv", "line 2", "column z", "14")),
        ("lines.csv", "symbol,energy\nAl,1300", ("own/lines.csv", "line 1", "columns must be")),
        ("lines.csv", HEAD + "\n" + MOVED + "\n" + MOVED, ("own/lines.csv", "line 3", "stands in line 2")),
        ("lines.csv", HEAD + "\n" + MOVED.replace("KL23L23,KL23L23", "XYZ,XYZ"), ("line 2", "transition", "XYZ")),
        (
            "rivals.csv",
            "symbol,z,transition,rival,rival_transition,away_ev,reach_ev,decided_by,weakly_by,ruled_out_by,kind,source\n"
            "Al,13,KL23L23,Cu,LMM,1,5,,,,calculated,computed",
            ("own/rivals.csv", "line 2", "rival_transition", "LMM"),
        ),
        ("published_lines.csv", "x", ("own/published_lines.csv", "lines.csv")),
        ("transitions.csv", "x", ("own/transitions.csv", "no table that ident reads")),
        ("my_lines.csv", "x", ("own/my_lines.csv", "lines.csv")),
    ],
)
def test_what_is_malformed_or_never_read_is_refused(
    run: Run, tmp_path: Path, name: str, content: str, parts: tuple[str, ...]
) -> None:
    folder = tmp_path / "own"
    folder.mkdir()
    (folder / name).write_text(content + "\n", encoding="utf-8")
    code, out, err = run("at", "--tables", folder, "1396")
    line = one_error_line(err)
    assert (code, out) == (1, "")
    for part in parts:
        assert part in line


@pytest.mark.parametrize("what", ["--check", "--rebuild"])
def test_own_tables_are_never_written_into_the_shipped_ones(run: Run, own: Path, what: str) -> None:
    code, _, err = run("tables", what, "--tables", own)
    assert code == 2
    assert "shipped tables" in err


def test_a_folder_that_is_none_or_empty_is_refused(tmp_path: Path) -> None:
    with pytest.raises(TableError, match="is no folder"):
        tables.use_tables(tmp_path / "nowhere")
    with pytest.raises(TableError, match="holds no table"):
        tables.use_tables(tmp_path)
    assert tables.own_tables() is None
