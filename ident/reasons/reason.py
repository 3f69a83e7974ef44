"""What a reason is, and what a rule is."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal

from .words import distinct

if TYPE_CHECKING:
    from ..matching.evidence import ElementEvidence, Evidence, LineEvidence

Side = Literal["for", "against", "untested"]


@dataclass(frozen=True, kw_only=True)
class Reason:
    """One reason for or against an element, or one that could not be tested."""

    code: str  # stable, documented in the README
    side: Side
    text: str  # one sentence with the numbers


@dataclass(frozen=True, kw_only=True)
class Subject:
    """The element a rule looks at, with the whole of the evidence around it."""

    element: ElementEvidence
    evidence: Evidence

    @property
    def met(self) -> tuple[LineEvidence, ...]:
        """Lines that met a minimum, strongest first, one a minimum."""
        return tuple(distinct([line for line in self.element.lines if line.status == "met"]))

    @property
    def own(self) -> tuple[LineEvidence, ...]:
        """Met lines that explain most of their minimum: those the element rests on."""
        return tuple(line for line in self.met if line.share is None or line.share >= 0.5)


Weighed = tuple[float, str]  # natural-log odds that a sentence speaks for, and the sentence


class Rule:
    """Base of the rules; the docstring of each is its claim."""

    side: Side

    @classmethod
    def code(cls) -> str:
        """Give the name of the class as words joined by hyphens."""
        return re.sub(r"(?<=[a-z])(?=[A-Z])", "-", cls.__name__).lower()

    def says(self, subject: Subject) -> Iterator[Weighed]:
        """Give each sentence with its weight; nothing when the rule does not apply."""
        raise NotImplementedError
