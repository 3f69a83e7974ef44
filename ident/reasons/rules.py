"""All rules, and the one function that applies them."""

from __future__ import annotations

from typing import TYPE_CHECKING

from .line_rules import LINE_RULES
from .reason import Reason, Rule, Subject
from .whole_rules import WHOLE_RULES

if TYPE_CHECKING:
    from ..matching.evidence import ElementEvidence, Evidence

RULES: tuple[type[Rule], ...] = LINE_RULES + WHOLE_RULES


def explain(element: ElementEvidence, evidence: Evidence) -> tuple[Reason, ...]:
    """Give the reasons for and against an element and those not tested, weightiest first.

    Parameters
    ----------
    element : ElementEvidence
        The element in question.
    evidence : Evidence
        The matcher's whole answer, to which it belongs.
    """
    subject = Subject(element=element, evidence=evidence)
    weighed: list[tuple[float, Reason]] = []
    for rule in RULES:
        for weight, text in rule().says(subject):
            weighed.append((abs(weight), Reason(code=rule.code(), side=rule.side, text=text)))
    weighed.sort(key=lambda pair: -pair[0])  # stable: rules of equal weight keep their order
    return tuple(reason for _, reason in weighed)
