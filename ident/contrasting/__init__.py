"""Suspect against clean: what is on the failed spot that is not on good ones.

The package is not called after its function, so that `ident.contrast` is always the function.
"""

from __future__ import annotations

from .answer import VERDICTS, Contrast, Difference, Hint, NotComparable, Verdict
from .ask import contrast
from .words import CONTRAST_CODES

__all__ = [
    "CONTRAST_CODES",
    "VERDICTS",
    "Contrast",
    "Difference",
    "Hint",
    "NotComparable",
    "Verdict",
    "contrast",
]
