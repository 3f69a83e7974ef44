"""The front door: `identify(spectrum, ...) -> Identification`.

The module is not called after its function, so that `ident.identify` is always the function.
"""

from __future__ import annotations

from .answer import (
    UNCALIBRATED,
    ArtefactNote,
    Assignment,
    Identification,
    Inseparable,
    Limit,
    LineNote,
    Rival,
    Scale,
    State,
    Unexplained,
    Untestable,
    Verdict,
    WhyNot,
    minima_answer,
    plain_data,
    verdict_of,
)
from .build import Examination, examine, identify, relative_resolution

__all__ = [
    "UNCALIBRATED",
    "ArtefactNote",
    "Assignment",
    "Examination",
    "Identification",
    "Inseparable",
    "Limit",
    "LineNote",
    "Rival",
    "Scale",
    "State",
    "Unexplained",
    "Untestable",
    "Verdict",
    "WhyNot",
    "examine",
    "identify",
    "minima_answer",
    "plain_data",
    "relative_resolution",
    "verdict_of",
]
