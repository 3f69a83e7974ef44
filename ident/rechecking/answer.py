"""What a second opinion is: frozen records whose fields are the keys of the JSON answer."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Literal

from ..identification.answer import plain_data
from ..reasons import Reason

if TYPE_CHECKING:
    import pandas as pd

    from ..identification import Identification

Verdict = Literal["agrees", "disagrees", "undecided", "impossible", "unreadable"]
VERDICTS: tuple[Verdict, ...] = ("agrees", "undecided", "disagrees", "impossible", "unreadable")
SCHEMA = 1


@dataclass(frozen=True, kw_only=True)
class LabelOpinion:
    """One label, and what the spectrum says of it."""

    energy_ev: float | None  # as given; None for a bare element
    label: str  # as given
    read_as: str | None  # "Ti L3M23V", "N and Ti"; None when it could not be read
    elements: tuple[str, ...]  # symbols it names
    verdict: Verdict
    better: tuple[str, ...]  # elements that fit better there, best first
    choices: tuple[str, ...]  # what an unreadable label may mean
    probability: float | None  # of the element; of several the least likely, with "or" the likeliest
    minimum_ev: float | None  # the minimum that the label was taken to mean
    reasons: tuple[Reason, ...]  # weightiest first
    line: int | None = None  # of the file of labels, from 1


@dataclass(frozen=True, kw_only=True)
class Missed:
    """An element that no label names."""

    element: str
    energy_ev: float | None  # its strongest line met
    probability: float


@dataclass(frozen=True, kw_only=True)
class Recheck:
    """A second opinion on somebody else's labels."""

    schema: int = SCHEMA
    spectrum: str
    sha256: str | None
    edition: str
    own_tables: dict[str, Any] | None = None
    settings: dict[str, Any]
    labels: tuple[LabelOpinion, ...]  # in the order given
    missed: tuple[Missed, ...]  # probability 0.5 and more
    perhaps_missed: tuple[Missed, ...]  # from 0.05
    counts: dict[str, int]  # verdict -> number of labels
    cautions: tuple[str, ...]
    warnings: tuple[str, ...]
    opinion: Identification  # the identification it rests on; not part of the JSON

    def to_dict(self) -> dict[str, Any]:
        """Give the answer as plain data for JSON, without the identification behind it."""
        names = [name for name in self.__dataclass_fields__ if name != "opinion"]
        return {name: plain_data(getattr(self, name)) for name in names}

    def to_frame(self) -> pd.DataFrame:
        """Give one row per label, in the order given."""
        import pandas as pd

        columns = ("energy_ev", "label", "read_as", "verdict", "better", "probability", "minimum_ev")
        return pd.DataFrame([[getattr(label, name) for name in columns] for label in self.labels], columns=columns)
