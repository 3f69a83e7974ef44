"""The front door: `identify(spectrum, ...) -> Identification`.

The module is not called after its function, so that `ident.identify` is always the function.
"""

from __future__ import annotations

from .answer import (
    UNCALIBRATED,
    ArtefactNote,
    Assignment,
    FurtherScan,
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
from .build import Examination, examine, identify, relative_resolution, settings_from
from .together import identify_together, sittings_of, warned_of_sitting

__all__ = [
    "UNCALIBRATED",
    "ArtefactNote",
    "Assignment",
    "Examination",
    "FurtherScan",
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
    "identify_together",
    "minima_answer",
    "plain_data",
    "relative_resolution",
    "settings_from",
    "sittings_of",
    "verdict_of",
    "warned_of_sitting",
]
