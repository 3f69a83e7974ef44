"""Questions put to the tables alone, without a spectrum: what could be at an energy, and the card of an element.

Energies are on the scale that the user asks for; by default that of the handbooks, which analysts know (Ti 418,
Fe 651, Al 1396). Nothing here loads numpy: such a question should cost next to nothing.
"""

from __future__ import annotations

from ..physics.scales import EnergyScale
from .at import LOOKUP_CODES, Candidate, Need, candidates_at
from .card import CardLine, CardShift, CardSource, ElementCard, element_card
from .depths import CardEscape
from .energies import HANDBOOK, stated_ev
from .plain import at_answer, card_answer
from .rivalry import CardRival, Decider

__all__ = [
    "HANDBOOK",
    "LOOKUP_CODES",
    "Candidate",
    "CardEscape",
    "CardLine",
    "CardRival",
    "CardShift",
    "CardSource",
    "Decider",
    "ElementCard",
    "EnergyScale",
    "Need",
    "at_answer",
    "candidates_at",
    "card_answer",
    "element_card",
    "stated_ev",
]
