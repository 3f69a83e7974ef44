"""The built wheel carries the tables: that build succeeds silently without them."""

from __future__ import annotations

import subprocess
import sys
import zipfile
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]


def tracked_tables() -> list[Path]:
    listed = subprocess.run(
        ["git", "ls-files", "-z", "reference"], cwd=ROOT, capture_output=True, text=True, check=False
    )
    if listed.returncode == 0 and listed.stdout:
        return [ROOT / name for name in listed.stdout.split("\0") if name]
    return [path for path in (ROOT / "reference").rglob("*") if path.is_file()]


def test_wheel_has_every_table_byte_for_byte(tmp_path: Path) -> None:
    subprocess.run(
        [sys.executable, "-m", "build", "--wheel", "--no-isolation", "--outdir", str(tmp_path), str(ROOT)],
        check=True,
        capture_output=True,
    )
    (wheel,) = tmp_path.glob("*.whl")
    tables = tracked_tables()
    assert tables
    with zipfile.ZipFile(wheel) as archive:
        names = set(archive.namelist())
        for table in tables:
            inside = f"ident/{table.relative_to(ROOT).as_posix()}"
            assert inside in names, f"{inside} is not in the wheel"
            assert archive.read(inside) == table.read_bytes(), f"{inside} differs"
        assert "ident/py.typed" in names
        for part in (ROOT / "ident" / "report" / "page").iterdir():
            assert not part.is_file() or f"ident/report/page/{part.name}" in names
        assert not [name for name in names if name.startswith(("tests/", "demo_spectra/", "reference/"))]
