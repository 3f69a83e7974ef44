"""The colours and marks of figures and pages, decided here and nowhere else.

No colour stands alone: every one has a mark of its own shape and a word. The colours keep apart in grey, since each
has another lightness, and for eyes that miss one kind of cone, since blue, orange and grey look different to all of
them (hues after Okabe and Ito, "Color Universal Design", 2008; lightness ours).
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

PAPER, INK, FAINT_INK, RULE = "#ffffff", "#1a1a1a", "#5c5c5c", "#b8b8b8"
GAP = "#ececec"  # what was not scanned
PREDICTED = "#d98a00"  # always dashed

Shape = Literal["disc", "diamond", "ring", "cross", "square"]
Role = Literal["present", "likely", "possible", "unexplained", "artefact"]


@dataclass(frozen=True, kw_only=True)
class Mark:
    """How one kind of minimum is shown: never by its colour alone."""

    word: str
    colour: str  # "#rrggbb"
    shape: Shape


MARKS: dict[Role, Mark] = {
    "present": Mark(word="present", colour="#00295a", shape="disc"),
    "likely": Mark(word="likely", colour="#0a68b0", shape="diamond"),
    "possible": Mark(word="possible", colour="#4592cc", shape="ring"),
    "unexplained": Mark(word="unexplained", colour="#cb5308", shape="cross"),
    "artefact": Mark(word="artefact", colour="#434343", shape="square"),
}
