"""Documents are true: the README's commands run, every command and every reason code is in it."""

from __future__ import annotations

import os
import re
import shlex
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

from ident.cli import COMMANDS
from ident.contrasting import CONTRAST_CODES
from ident.lookup import LOOKUP_CODES
from ident.reasons import ASKED_CODES, RULES
from ident.rechecking import RECHECK_CODES

ROOT = Path(__file__).resolve().parents[2]
README = (ROOT / "README.md").read_text(encoding="utf-8")
BLOCKS = re.findall(r"^```sh\n(.*?)^```", README, flags=re.MULTILINE | re.DOTALL)
LINES = [line for block in BLOCKS for line in block.splitlines() if line.strip()]
EXAMPLES = [line for line in LINES if line.startswith("ident ")]


@pytest.fixture(scope="module")
def desk(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A folder with the demo spectra, into which the examples may write."""
    folder = tmp_path_factory.mktemp("desk")
    shutil.copytree(ROOT / "demo_spectra", folder / "demo_spectra")
    return folder


@pytest.mark.parametrize("line", EXAMPLES)
def test_readme_example_runs(line: str, desk: Path) -> None:
    command, _, remark = line.partition("  #")
    said = re.search(r"exit (\d)", remark)
    wanted = int(said[1]) if said else 0
    words = shlex.split(command)[1:]
    done = subprocess.run(
        [sys.executable, "-m", "ident", *words],
        cwd=desk,
        env={**os.environ, "PYTHONPATH": str(ROOT)},
        capture_output=True,
        text=True,
        check=False,
        timeout=300,
    )
    assert done.returncode == wanted, done.stderr
    assert "Traceback" not in done.stderr
    assert done.stdout if wanted == 0 else done.stderr


def test_the_two_commands_stand_near_the_top() -> None:
    first, second = [line for line in LINES if line.startswith("python3 -m venv")]
    assert "pip install" in first
    assert "ident assign demo_spectra/" in first
    assert (ROOT / first.split()[-1]).is_file()
    assert "pytest" in second


def test_ci_runs_the_command_of_the_readme_itself() -> None:
    script = (ROOT / ".ci" / "run").read_text(encoding="utf-8")
    assert "README.md" in script
    assert "pytest" not in script  # it is read from the README, so that the two cannot differ


@pytest.mark.parametrize("name", COMMANDS)
def test_every_command_has_an_example_in_readme_and_help(name: str) -> None:
    assert any(line.split()[1] == name for line in EXAMPLES)
    done = subprocess.run(
        [sys.executable, "-m", "ident", name, "--help"], capture_output=True, text=True, check=True, timeout=60
    )
    assert f"Example: ident {name}" in done.stdout


def test_every_reason_code_is_documented_and_no_other() -> None:
    section = README.split("## Reason codes", 1)[1].split("\n## ", 1)[0]
    documented = re.findall(r"^\| `([a-z-]+)` \|", section, flags=re.MULTILINE)
    assert len(documented) == len(set(documented))
    others = {*LOOKUP_CODES, *ASKED_CODES, *RECHECK_CODES, *CONTRAST_CODES}
    assert set(documented) == {rule.code() for rule in RULES} | others


def test_readme_tells_side_and_claim_of_each_rule() -> None:
    for rule in RULES:
        row = re.search(rf"^\| `{rule.code()}` \| (\w+) \| (.+) \|$", README, flags=re.MULTILINE)
        assert row is not None
        assert row[1] == rule.side
        assert row[2].rstrip(".") == (rule.__doc__ or "").rstrip(".")
