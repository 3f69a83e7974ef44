"""Answers as text, JSON Lines, CSV and figures. No element is weighed here; all from outside is escaped."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from ..identification import Examination

__all__ = ["draw_figure"]


def draw_figure(examination: Examination, path: str | Path) -> None:
    """Draw what `examine` gave and save it as .png, .svg or .pdf; see `figure.write_figure` for errors."""
    from .figure import write_figure

    write_figure(examination, path)
