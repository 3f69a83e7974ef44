"""What the matcher found, in numbers: sentences are made of it in `reasons`, never here."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

LineStatus = Literal["met", "missing", "hidden", "out of range"]
Charging = Literal["yes", "no", "cannot tell"]


@dataclass(frozen=True, kw_only=True)
class LineEvidence:
    """One expected line of an element, and what stands in the spectrum there.

    All energies are on the spectrum's own axis (scale and shift applied) but for `table_ev`.
    """

    transition: str
    table_ev: float  # derivative minimum on the absolute scale of `physics`
    expected_ev: float  # the same with inferred offset, slope and shift
    sigma_ev: float  # standard deviation of expected_ev against found_ev
    relative_height: float  # depth relative to the strongest line of its element
    status: LineStatus
    found_ev: float | None = None  # the minimum that it met
    found_sigma_ev: float | None = None
    share: float | None = None  # part of that minimum's depth which this line explains, 0 to 1
    shared_with: tuple[str, ...] = ()  # other elements with a share of 0.1 or more in that minimum
    expected_significance: float | None = None  # depth expected over noise; None out of range
    found_significance: float | None = None
    depth_ratio: float | None = None  # depth found over depth expected from all elements there
    depth_ratio_factor: float | None = None  # one standard deviation, multiplicative
    hidden_by: tuple[str, ...] = ()  # elements under whose lines it would disappear
    log_odds: float = 0.0  # what this line added for (+) or against (-) the element, natural log


@dataclass(frozen=True, kw_only=True)
class RivalEvidence:
    """Another element that could stand at a minimum which this one claims."""

    element: str
    transition: str
    at_ev: float  # the minimum in question
    deviation_sd: float
    missing: tuple[tuple[str, float, float], ...] = ()  # rival's lines not seen: transition, eV, expected significance
    probability: float = 0.0  # of the rival


@dataclass(frozen=True, kw_only=True)
class StateEvidence:
    """The chemical state that the places of the lines speak for."""

    name: str
    shift_ev: float  # that the tables give for it, of valence lines where these were seen
    next_name: str | None = None
    log_odds: float = 0.0  # over the next best state, natural log
    over_reference: float = 0.0  # the same over the state that the lines' own energies refer to
    reference: bool = False  # whether it is that state
    seen_ev: float = 0.0  # shift found, and its standard deviation
    seen_sigma_ev: float = 0.0
    second_name: str | None = None  # a state in which the element stands there as well
    second_shift_ev: float | None = None


@dataclass(frozen=True, kw_only=True)
class AbundanceEvidence:
    """How much of an element there is, were the surface homogeneous."""

    atomic_percent: float
    factor: float  # one standard deviation, multiplicative


@dataclass(frozen=True, kw_only=True)
class ElementEvidence:
    """One element as weighed."""

    element: str
    z: int
    probability: float  # 0 to 1
    log_odds: float  # of the element against the best explanation without it, natural log
    lines: tuple[LineEvidence, ...]  # strongest first
    shift_ev: float = 0.0
    shift_sigma_ev: float = 0.0
    state: StateEvidence | None = None
    strength: float = 0.0  # depth of its strongest line, units of the differential spectrum
    prior_log_odds: float = 0.0  # what commonness alone said
    common: bool = False  # carbon and oxygen: on nearly everything that has seen air
    sputter_gas: bool = False  # what the surface was sputtered with
    single_low_line: bool = False  # rests on one line below 110 eV
    rivals: tuple[RivalEvidence, ...] = ()
    abundance: AbundanceEvidence | None = None


@dataclass(frozen=True, kw_only=True)
class ScaleEvidence:
    """Axis = absolute + offset + slope * absolute, as inferred from the spectrum."""

    offset_ev: float
    offset_sigma_ev: float
    slope: float
    slope_sigma: float
    charging: Charging
    covariance: tuple[tuple[float, float], ...] = ()  # (2, 2) of offset in eV and slope
    lines_used: int = 0
    readings: tuple[tuple[float, float, float], ...] = ()  # handbook energy, how far too high it reads here, sd; eV


ArtefactKind = Literal[
    "elastic peak", "above the beam", "ionisation loss", "plasmon loss", "loss tail", "satellite", "secondaries"
]


@dataclass(frozen=True, kw_only=True)
class ArtefactEvidence:
    """A minimum that is no line of its own, and what it is instead."""

    energy_ev: float
    kind: ArtefactKind
    element: str | None = None  # whose loss or satellite it is
    transition: str | None = None  # of which line
    of_ev: float | None = None  # where that line stands
    away_ev: float | None = None  # from it, negative below
    level: str | None = None  # that is ionised
    order: int = 0  # of a plasmon loss: 0 surface, 1 bulk, 2 twice
    expected_ev: float | None = None  # where the elastic peak, the edge or the loss should be


@dataclass(frozen=True, kw_only=True)
class UnexplainedEvidence:
    """A minimum that no accepted element explains."""

    energy_ev: float
    significance: float
    candidates: tuple[str, ...]  # elements with a line within reach, likeliest first


@dataclass(frozen=True, kw_only=True)
class ScanEvidence:
    """A further scan, and what it would tell."""

    element: str  # whose line it looks for
    transition: str
    line_ev: float  # where that line would be on this axis
    low_ev: float
    high_ev: float
    dwell: float  # against this scan's, for a line that is weaker than expected to be seen
    information_bits: float  # expected of it
    in_range: bool = False  # scanned already, and too noisy there


@dataclass(frozen=True, kw_only=True)
class InseparableEvidence:
    """Elements that this scan cannot tell apart."""

    elements: tuple[str, ...]
    at_ev: float
    scans: tuple[ScanEvidence, ...] = ()  # that would decide, most information for the time first


@dataclass(frozen=True, kw_only=True)
class UntestableEvidence:
    """An element on which this scan says nothing."""

    element: str
    cause: Literal["no Auger line", "out of range", "no table line", "coarse step"]
    nearest_ev: float | None = None  # its strongest line, if it has one


@dataclass(frozen=True, kw_only=True)
class LimitEvidence:
    """How much of an absent element would have been called, in 95 of 100 cases."""

    element: str
    atomic_percent: float
    line_ev: float
    usual: bool = False  # often met on technical surfaces


@dataclass(frozen=True, kw_only=True)
class AskedEvidence:
    """What can be said of an element that was asked about."""

    element: str
    probability: float
    weighed: ElementEvidence | None  # None when no minimum stands where one of its strong lines could be
    transition: str | None = None  # its strongest line in the scan, None when there is none
    expected_ev: float | None = None
    nearest_ev: float | None = None  # the minimum nearest to it
    limit: LimitEvidence | None = None
    ruled_out: bool = False


@dataclass(frozen=True, kw_only=True)
class Evidence:
    """The matcher's whole answer."""

    scale: ScaleEvidence
    elements: tuple[ElementEvidence, ...]  # probability >= 0.01, falling
    unexplained: tuple[UnexplainedEvidence, ...]
    inseparable: tuple[InseparableEvidence, ...]
    untestable: tuple[UntestableEvidence, ...]
    limits: tuple[LimitEvidence, ...] = ()
    asked: tuple[AskedEvidence, ...] = ()  # in the order asked
    artefacts: tuple[ArtefactEvidence, ...] = ()  # rising in energy
