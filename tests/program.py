"""The program as a user calls it, for tests of every folder."""

from __future__ import annotations

from collections.abc import Callable
from typing import TypeAlias

Run: TypeAlias = Callable[..., tuple[int, str, str]]  # arguments to exit code, standard output, standard error


def one_error_line(err: str) -> str:
    """The only line of complaint on standard error."""
    lines = [line for line in err.splitlines() if line.startswith("ident: ") and "warning" not in line]
    assert len(lines) == 1, err
    assert "Traceback" not in err
    return lines[0]
