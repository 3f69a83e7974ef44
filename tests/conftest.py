"""What tests of every folder share."""

from __future__ import annotations

import pytest

from ident.cli import main
from tests.program import Run


@pytest.fixture
def run(capsys: pytest.CaptureFixture[str]) -> Run:
    """Call the program with arguments; exit code, standard output and standard error."""

    def call(*argv: object) -> tuple[int, str, str]:
        with pytest.raises(SystemExit) as end:
            main([str(word) for word in argv])
        out, err = capsys.readouterr()
        code = end.value.code
        return (code if isinstance(code, int) else 0), out, err

    return call
