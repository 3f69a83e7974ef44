"""What an identification is: frozen records whose fields are the keys of the JSON answer."""

from __future__ import annotations

import math
from dataclasses import dataclass, fields, is_dataclass
from typing import TYPE_CHECKING, Any, Literal

from ..reasons import Reason

if TYPE_CHECKING:
    import pandas as pd

    from ..minima import Analysis
    from ..scale import ScaleCalibration

INDICATIVE = "indicative: a surface alike throughout, sensitivities from the tables, no standard measured"
UNCALIBRATED = "not calibrated: this spectrum, and how axes usually are"
Verdict = Literal["present", "likely", "possible", "not supported"]
SCHEMA = 1
DIGITS = 6  # significant digits of numbers in JSON


def verdict_of(probability: float) -> Verdict:
    """Name a probability: present from 0.95, likely from 0.5, possible from 0.05, not supported below."""
    if probability >= 0.95:
        return "present"
    if probability >= 0.5:
        return "likely"
    return "possible" if probability >= 0.05 else "not supported"


@dataclass(frozen=True, kw_only=True)
class Scale:
    """The axis of the spectrum against the absolute one: axis = absolute + offset + slope * absolute."""

    offset_ev: float
    offset_sigma_ev: float
    slope: float
    slope_sigma: float
    charging: Literal["yes", "no", "cannot tell"]
    source: str = UNCALIBRATED  # what was known of the axis beforehand
    readings: tuple[tuple[float, float, float], ...] = ()  # handbook energy, how far too high it reads here, sd; eV


@dataclass(frozen=True, kw_only=True)
class LineNote:
    """One line of an element, on the axis of the spectrum."""

    transition: str
    expected_ev: float
    sigma_ev: float
    found_ev: float | None
    share: float | None  # part of that minimum it explains, 0 to 1
    status: Literal["met", "missing", "hidden", "out of range"]
    relative_height: float


@dataclass(frozen=True, kw_only=True)
class State:
    """The chemical state that the places of the lines speak for; Auger data alone do not prove it."""

    name: str
    shift_ev: float
    odds: float | None = None  # to one, over the next best state; None where two states stand there at once
    next: str | None = None
    second: str | None = None  # a state in which the element stands there as well


@dataclass(frozen=True, kw_only=True)
class Rival:
    """Another element that could stand at a minimum claimed here."""

    element: str
    at_ev: float
    text: str


@dataclass(frozen=True, kw_only=True)
class Abundance:
    """How much of it there is, were the surface alike throughout; indicative, no quantification."""

    atomic_percent: float
    factor: float  # one standard deviation, multiplicative
    basis: str = INDICATIVE


@dataclass(frozen=True, kw_only=True)
class Assignment:
    """One element, with what speaks for and against it."""

    element: str
    z: int
    probability: float  # 0 to 1
    verdict: Verdict
    lines: tuple[LineNote, ...]  # strongest first
    state: State | None
    reasons: tuple[Reason, ...]  # weightiest first
    rivals: tuple[Rival, ...]
    abundance: Abundance | None = None


@dataclass(frozen=True, kw_only=True)
class FurtherScan:
    """A window that would tell whether an element is there."""

    element: str
    transition: str
    low_ev: float
    high_ev: float
    dwell: float  # against this scan's, at equal beam, for a line weaker than expected to be seen
    information_bits: float  # expected of it


@dataclass(frozen=True, kw_only=True)
class Inseparable:
    """Elements that this scan cannot tell apart, and the scan that would."""

    elements: tuple[str, ...]  # likeliest first
    at_ev: float
    settle: str  # the first of the scans, in words
    scans: tuple[FurtherScan, ...] = ()  # that would decide, most information for the time first


@dataclass(frozen=True, kw_only=True)
class Unexplained:
    """A minimum that no element was found for."""

    energy_ev: float
    significance: float  # depth over noise
    candidates: tuple[str, ...]


@dataclass(frozen=True, kw_only=True)
class Limit:
    """An element not seen, and how much of it would have been called in 95 of 100 cases."""

    element: str
    atomic_percent: float
    line_ev: float
    usual: bool = False  # often met on technical surfaces


@dataclass(frozen=True, kw_only=True)
class WhyNot:
    """What speaks for and against an element that was asked about."""

    element: str
    probability: float
    verdict: Verdict
    reasons: tuple[Reason, ...]


@dataclass(frozen=True, kw_only=True)
class Untestable:
    """An element on which this scan says nothing."""

    element: str
    why: str


@dataclass(frozen=True, kw_only=True)
class ArtefactNote:
    """Something in the data that is no line."""

    energy_ev: float
    what: str
    kind: str = "artefact"  # in a word or two: spike, plasmon loss, elastic peak and so on


@dataclass(frozen=True, kw_only=True)
class Identification:
    """Which elements a spectrum shows, how sure that is and why."""

    schema: int = SCHEMA
    spectrum: str  # the file as given; "#2" for its second spectrum
    sha256: str | None
    edition: str  # of the program and of the tables
    own_tables: dict[str, Any] | None = None  # what lies over the shipped tables: folder, sha256, files
    settings: dict[str, Any]
    header: dict[str, Any]  # what the file says of the measurement
    kind: str  # direct or derivative
    ranges_ev: tuple[tuple[float, float], ...]
    scale: Scale
    minima: int  # how many stand above the noise
    assignments: tuple[Assignment, ...]  # probability 0.01 and more, falling
    inseparable: tuple[Inseparable, ...]
    unexplained: tuple[Unexplained, ...]
    limits: tuple[Limit, ...]
    why_not: tuple[WhyNot, ...]  # in the order asked
    untestable: tuple[Untestable, ...]
    artefacts: tuple[ArtefactNote, ...]
    cautions: tuple[str, ...]
    warnings: tuple[str, ...]

    @property
    def called(self) -> tuple[str, ...]:
        """Symbols of the elements with probability 0.5 or more."""
        return tuple(a.element for a in self.assignments if a.probability >= 0.5)

    def to_dict(self) -> dict[str, Any]:
        """Give the answer as plain data for JSON: lists, dicts, finite numbers, None for the rest."""
        plain = plain_data(self)
        if not isinstance(plain, dict):
            raise TypeError("a record always becomes a dict")
        return plain

    def to_frame(self) -> pd.DataFrame:
        """Give one row per assignment, likeliest first."""
        import pandas as pd

        return pd.DataFrame([_row(self, a) for a in self.assignments], columns=list(FRAME_COLUMNS))


FRAME_COLUMNS = (
    "spectrum",
    "element",
    "z",
    "probability",
    "verdict",
    "lines_met",
    "state",
    "shift_ev",
    "reasons_for",
    "reasons_against",
)


def _row(answer: Identification, assignment: Assignment) -> dict[str, Any]:
    met = [line.transition for line in assignment.lines if line.status == "met"]
    state = assignment.state
    return {
        "spectrum": answer.spectrum,
        "element": assignment.element,
        "z": assignment.z,
        "probability": assignment.probability,
        "verdict": assignment.verdict,
        "lines_met": " ".join(met),
        "state": state.name if state else None,
        "shift_ev": state.shift_ev if state else None,
        "reasons_for": sum(reason.side == "for" for reason in assignment.reasons),
        "reasons_against": sum(reason.side == "against" for reason in assignment.reasons),
    }


def plain_data(value: Any) -> Any:
    """Turn records into what JSON holds; numbers keep six digits, and those that are not finite become None."""
    if is_dataclass(value) and not isinstance(value, type):
        return {field.name: plain_data(getattr(value, field.name)) for field in fields(value)}
    if isinstance(value, dict):
        return {str(key): plain_data(item) for key, item in value.items()}
    if isinstance(value, tuple | list):
        return [plain_data(item) for item in value]
    if isinstance(value, float):
        return float(f"{value:.{DIGITS}g}") if math.isfinite(value) else None
    return value


def minima_answer(analysis: Analysis, scale: ScaleCalibration | None = None) -> dict[str, Any]:
    """Give the minima of a spectrum as plain data for JSON, with energies on a calibrated axis beside them."""
    spectrum = analysis.spectrum
    minima = [plain_data(minimum) for minimum in analysis.minima]
    if scale is not None:
        for told, minimum in zip(minima, analysis.minima, strict=True):
            corrected = scale.corrected(minimum.energy_ev, minimum.sigma_ev)
            told["corrected_ev"], told["corrected_sigma_ev"] = plain_data(corrected)
    return {
        "spectrum": spectrum.name,
        "sha256": spectrum.sha256,
        "kind": spectrum.kind,
        "ranges_ev": plain_data(spectrum.ranges_ev),
        "scale": UNCALIBRATED if scale is None else scale.summary(),
        "minima": minima,
        "artefacts": [plain_data(artefact) for artefact in analysis.artefacts],
        "warnings": list(analysis.warnings),
    }
