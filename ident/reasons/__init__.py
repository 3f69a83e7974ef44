"""Evidence to words: every reason has a code, a side and a sentence with numbers in it.

The rules are in `rules`; each is a small class whose name is the code and whose docstring is the claim.
"""

from __future__ import annotations

from .artefacts import explain_artefact
from .asked import ASKED_CODES, explain_asked
from .reason import Reason, Rule, Side, Subject
from .rules import RULES, explain
from .whole_rules import state_to_tell

__all__ = [
    "ASKED_CODES",
    "RULES",
    "Reason",
    "Rule",
    "Side",
    "Subject",
    "explain",
    "explain_artefact",
    "explain_asked",
    "state_to_tell",
]
