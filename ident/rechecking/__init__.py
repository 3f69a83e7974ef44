"""A second opinion on somebody else's labels: `recheck(spectrum, labels)`.

Labels are read forgivingly (`notation` one label, `listing` a file of them), the spectrum is identified without them,
and each label is held against that (`judge`).
"""

from __future__ import annotations

from .answer import VERDICTS, LabelOpinion, Missed, Recheck, Verdict
from .ask import recheck
from .judge import RECHECK_CODES
from .listing import Label, read_labels
from .notation import LabelReading, Part, read_label

__all__ = [
    "RECHECK_CODES",
    "VERDICTS",
    "Label",
    "LabelOpinion",
    "LabelReading",
    "Missed",
    "Part",
    "Recheck",
    "Verdict",
    "read_label",
    "read_labels",
    "recheck",
]
