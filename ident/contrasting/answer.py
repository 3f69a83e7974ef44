"""What a comparison of suspect and clean spots is: frozen records whose fields are the keys of the JSON answer."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, Literal

from ..identification.answer import plain_data
from ..reasons import Reason

if TYPE_CHECKING:
    import pandas as pd

    from ..identification import Examination

Verdict = Literal["only on suspect", "enriched", "depleted", "only on clean", "unchanged"]
VERDICTS: tuple[Verdict, ...] = ("only on suspect", "enriched", "depleted", "only on clean", "unchanged")
SCHEMA = 1


@dataclass(frozen=True, kw_only=True)
class Difference:
    """One element on the suspect spot against the clean ones."""

    element: str
    verdict: Verdict
    probability: float  # that it is on the suspect spot
    probability_clean: float  # the highest on any clean one
    ratio: float | None  # suspect over clean, None when one of them shows nothing of it
    ratio_factor: float | None  # one standard deviation, multiplicative
    limit: float | None  # the ratio is at least (only on suspect) or at most (only on clean) this
    above_scatter: bool | None  # beyond twice what the clean ones differ among themselves; None with one clean one
    lines: tuple[str, ...]  # transitions that were compared, the same in all spectra
    reasons: tuple[Reason, ...]


@dataclass(frozen=True, kw_only=True)
class NotComparable:
    """An element that was found somewhere and cannot be compared."""

    element: str
    why: str


@dataclass(frozen=True, kw_only=True)
class Hint:
    """A residue whose elements are the ones that differ; elements alone do not prove it."""

    pattern: str
    text: str
    elements: tuple[str, ...]  # that speak for it
    test: str  # that could prove it
    source: str


@dataclass(frozen=True, kw_only=True)
class Contrast:
    """What the suspect spot has that the clean ones do not."""

    schema: int = SCHEMA
    suspect: str
    clean: tuple[str, ...]
    sha256: dict[str, str | None]  # of each input by its name
    edition: str
    own_tables: dict[str, Any] | None = None
    settings: dict[str, Any]
    relative_to: str  # "total", or the element that ratios are relative to
    scatter: float | None  # of the clean ones among themselves, one standard deviation as a factor
    only_on_suspect: tuple[Difference, ...]
    enriched: tuple[Difference, ...]
    depleted: tuple[Difference, ...]
    only_on_clean: tuple[Difference, ...]
    unchanged: tuple[Difference, ...]
    not_comparable: tuple[NotComparable, ...]
    hints: tuple[Hint, ...]
    cautions: tuple[str, ...]
    warnings: tuple[str, ...]
    examined: tuple[Examination, ...]  # suspect first; not part of the JSON

    @property
    def differences(self) -> tuple[Difference, ...]:
        """All elements compared, what is new first."""
        return (*self.only_on_suspect, *self.enriched, *self.depleted, *self.only_on_clean, *self.unchanged)

    def to_dict(self) -> dict[str, Any]:
        """Give the answer as plain data for JSON."""
        names = [name for name in self.__dataclass_fields__ if name != "examined"]
        return {name: plain_data(getattr(self, name)) for name in names}

    def to_frame(self) -> pd.DataFrame:
        """Give one row per element compared."""
        import pandas as pd

        columns = ("element", "verdict", "probability", "probability_clean", "ratio", "ratio_factor", "limit")
        rows = [{name: getattr(one, name) for name in columns} for one in self.differences]
        return pd.DataFrame(rows, columns=list(columns))
