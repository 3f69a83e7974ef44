"""One frozen dataclass a table; its fields are the columns, in their order.

`unique_by` names the columns that tell its rows apart, `also` what may stand for a symbol beside those of the elements
with Auger lines.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import ClassVar

from .elements import AFTER_URANIUM, WITH_LINES

STRONG_HEIGHT = 0.2  # of the element's strongest line: from here a line has rivals, is one, or decides
REFERENCE_METALS = ("Al", "Cu", "Ag", "Au")  # by which energy scales are set
STATE_CLASSES = frozenset(
    "element oxide hydroxide nitride carbide sulphide sulphate phosphate carbonate fluoride chloride organic "
    "compound".split()
)
KINDS = frozenset({"measured", "compiled", "calculated", "recalled"})


# Levels of a transition: the vacancy and the two that are left empty, V being the valence band.
TRANSITION = re.compile(r"(K|L[1-3]{0,3}|[MOP][1-5]{0,5}|N[1-7]{0,7})((L[1-3]{0,3}|[MOP][1-5]{0,5}|N[1-7]{0,7}|V)){2}")


def _need(right: bool, column: str, what: str) -> None:
    if not right:
        raise ValueError(f"{column}: {what}")


@dataclass(frozen=True, kw_only=True, slots=True)
class Source:
    """What a source key stands for."""

    unique_by: ClassVar[tuple[str, ...]] = ("key",)

    key: str
    text: str
    doi: str


@dataclass(frozen=True, kw_only=True, slots=True)
class BindingEnergy:
    """Binding energy of a level, Fermi-referenced, solid where one is known."""

    unique_by: ClassVar[tuple[str, ...]] = ("symbol", "level")
    also: ClassVar[tuple[str, ...]] = (AFTER_URANIUM,)

    symbol: str
    z: int
    level: str
    energy_ev: float
    sigma_ev: float
    kind: str
    state: str
    source: str

    def __post_init__(self) -> None:
        _need(self.energy_ev >= 0, "energy_ev", "must not be negative")


@dataclass(frozen=True, kw_only=True, slots=True)
class PublishedLine:
    """A published line energy as its source states it."""

    unique_by: ClassVar[tuple[str, ...]] = ("symbol", "transition", "energy_ev", "form", "source")

    symbol: str
    z: int
    transition: str
    energy_ev: float
    sigma_ev: float
    relative_height: float | None
    form: str  # derivative, direct or unknown
    reference_level: str  # handbook, fermi or unknown
    status: str  # read or from memory
    confidence: str
    kind: str
    state: str
    source: str

    def __post_init__(self) -> None:
        _need(self.form in {"derivative", "direct", "unknown"}, "form", "must be derivative, direct or unknown")
        levels = {"handbook", "fermi", "unknown"}
        _need(self.reference_level in levels, "reference_level", "must be handbook, fermi or unknown")
        _need(self.status in {"read", "from memory"}, "status", "must be read or from memory")
        _need(self.confidence in {"normal", "low"}, "confidence", "must be normal or low")
        _need(self.sigma_ev > 0, "sigma_ev", "must be positive")


@dataclass(frozen=True, kw_only=True, slots=True)
class ScaleLine:
    """A line of a reference metal by which the energy scale is set."""

    unique_by: ClassVar[tuple[str, ...]] = ("symbol", "transition")

    symbol: str
    z: int
    transition: str
    energy_ev: float
    sigma_ev: float
    form: str  # direct or derivative
    reference_level: str  # fermi or handbook
    role: str  # sharp, low or minor: what the scale may rest on, see reference/README.md
    relative_height: float  # strongest line of the metal is 1
    status: str  # read or from memory
    kind: str
    state: str
    source: str

    def __post_init__(self) -> None:
        _need(self.symbol in REFERENCE_METALS, "symbol", f"must be one of {', '.join(REFERENCE_METALS)}")
        _need(20 <= self.energy_ev <= 3200, "energy_ev", "must lie between 20 and 3200 eV")
        _need(self.sigma_ev > 0, "sigma_ev", "must be positive")
        stated = (self.form, self.reference_level) in {("direct", "fermi"), ("derivative", "handbook")}
        _need(stated, "form", "must be direct with reference_level fermi, or derivative with handbook")
        _need(self.role in {"sharp", "low", "minor"}, "role", "must be sharp, low or minor")
        _need(0 < self.relative_height <= 1, "relative_height", "must lie between 0 and 1")
        _need(self.status in {"read", "from memory"}, "status", "must be read or from memory")


@dataclass(frozen=True, kw_only=True, slots=True)
class Family:
    """A family of transitions: what its correction is fitted to, chosen beforehand, and how."""

    unique_by: ClassVar[tuple[str, ...]] = ("family",)

    family: str
    degree: int  # of the polynomial in Z
    left_out: str  # symbols not fitted to, blank between
    reason: str
    kind: str
    source: str


@dataclass(frozen=True, kw_only=True, slots=True)
class Line:
    """One line of an element: derivative minimum on the absolute scale of `physics`."""

    unique_by: ClassVar[tuple[str, ...]] = ("symbol", "transition")

    symbol: str
    z: int
    transition: str
    family: str
    energy_ev: float
    sigma_ev: float
    energy_kind: str  # published, family or formula
    relative_height: float  # strongest line of the element is 1
    height_log_sigma: float
    height_kind: str  # published or computed
    valence: bool  # moves with the valence band: large chemical shifts
    state: str
    source: str

    def __post_init__(self) -> None:
        _need(self.energy_kind in {"published", "family", "formula"}, "energy_kind", "published, family or formula")
        _need(20 <= self.energy_ev <= 3200, "energy_ev", "must lie between 20 and 3200 eV")
        _need(self.sigma_ev > 0, "sigma_ev", "must be positive")
        _need(0 < self.relative_height <= 1, "relative_height", "must lie between 0 and 1")
        _need(self.height_log_sigma > 0, "height_log_sigma", "must be positive")
        _need(
            TRANSITION.fullmatch(self.transition) is not None, "transition", "is none; write it as KL23L23 or L3M45M45"
        )


@dataclass(frozen=True, kw_only=True, slots=True)
class Commonness:
    """How often an element is on a technical surface that is put under a microprobe."""

    unique_by: ClassVar[tuple[str, ...]] = ("symbol",)

    symbol: str
    z: int
    probability: float
    group: str
    kind: str
    source: str

    def __post_init__(self) -> None:
        _need(0 < self.probability < 1, "probability", "must lie between 0 and 1")


@dataclass(frozen=True, kw_only=True, slots=True)
class ChemicalShift:
    """Shift of a line in a chemical state against the state that its energy refers to."""

    unique_by: ClassVar[tuple[str, ...]] = ("symbol", "transition", "state")

    symbol: str
    z: int
    transition: str
    state: str  # formula or plain name
    state_class: str
    partner: str  # element that must be on the surface too, empty for none
    oxidation_state: int | None
    shift_ev: float
    sigma_ev: float
    valence: bool
    status: str  # read or from memory
    kind: str
    source: str

    def __post_init__(self) -> None:
        _need(self.sigma_ev > 0, "sigma_ev", "must be positive")
        _need(abs(self.shift_ev) <= 40, "shift_ev", "must lie between -40 and 40 eV")
        _need(self.state_class in STATE_CLASSES, "state_class", f"must be one of {', '.join(sorted(STATE_CLASSES))}")
        _need(self.partner == "" or self.partner in WITH_LINES, "partner", "is no element from Li to U")
        _need(self.status in {"read", "from memory"}, "status", "must be read or from memory")


@dataclass(frozen=True, kw_only=True, slots=True)
class ShiftPrior:
    """Shift that a usual compound of an element is expected to show, where chemical_shifts.csv says nothing."""

    unique_by: ClassVar[tuple[str, ...]] = ("symbol", "valence", "state_class", "oxidation_state")

    symbol: str
    z: int
    valence: bool
    state_class: str
    partner: str
    oxidation_state: int
    shift_ev: float
    sigma_ev: float
    kind: str
    source: str

    def __post_init__(self) -> None:
        _need(self.state_class in STATE_CLASSES, "state_class", f"must be one of {', '.join(sorted(STATE_CLASSES))}")
        _need(self.sigma_ev > 0, "sigma_ev", "must be positive")


@dataclass(frozen=True, kw_only=True, slots=True)
class ShiftRange:
    """How far chemistry may move a class of lines, by judgement; symbol * is every element not named."""

    unique_by: ClassVar[tuple[str, ...]] = ("symbol", "valence")
    also: ClassVar[tuple[str, ...]] = ("*",)

    symbol: str
    valence: bool
    lowest_ev: float
    highest_ev: float
    kind: str
    source: str

    def __post_init__(self) -> None:
        _need(self.lowest_ev < self.highest_ev, "highest_ev", "must lie above lowest_ev")


@dataclass(frozen=True, kw_only=True, slots=True)
class Sensitivity:
    """Depth of the strongest line of the pure element, Ag M5N45N45 = 1, at beams of 5 and 10 keV."""

    unique_by: ClassVar[tuple[str, ...]] = ("symbol",)

    symbol: str
    z: int
    transition: str
    sensitivity: float  # at 5 keV
    sensitivity_10kev: float
    factor: float  # one standard deviation, multiplicative
    kind: str
    source: str

    def __post_init__(self) -> None:
        _need(self.sensitivity > 0, "sensitivity", "must be positive")
        _need(self.sensitivity_10kev > 0, "sensitivity_10kev", "must be positive")
        _need(self.factor > 1, "factor", "must lie above 1")


@dataclass(frozen=True, kw_only=True, slots=True)
class PublishedSensitivity:
    """Sensitivity of an element's line as handbooks give it, pure elements, Ag M5N45N45 = 1."""

    unique_by: ClassVar[tuple[str, ...]] = ("symbol", "transition")

    symbol: str
    z: int
    transition: str
    sensitivity: float
    factor: float  # one standard deviation, multiplicative
    beam_kev: float
    status: str  # read or from memory
    confidence: str
    kind: str
    state: str
    source: str

    def __post_init__(self) -> None:
        _need(self.sensitivity > 0, "sensitivity", "must be positive")
        _need(self.factor > 1, "factor", "must lie above 1")
        _need(self.beam_kev > 0, "beam_kev", "must be positive")
        _need(self.status in {"read", "from memory"}, "status", "must be read or from memory")
        _need(self.confidence in {"normal", "low"}, "confidence", "must be normal or low")


@dataclass(frozen=True, kw_only=True, slots=True)
class Material:
    """What a mean free path in an element is worked out from."""

    unique_by: ClassVar[tuple[str, ...]] = ("symbol",)

    symbol: str
    z: int
    valence_electrons: int
    density_g_cm3: float
    density_sigma_g_cm3: float
    molar_mass: float
    gap_ev: float
    kind: str
    state: str
    source: str

    def __post_init__(self) -> None:
        _need(1 <= self.valence_electrons <= 12, "valence_electrons", "must lie between 1 and 12")
        _need(0.4 < self.density_g_cm3 < 25, "density_g_cm3", "must lie between 0.4 and 25 (no gas)")
        _need(self.density_sigma_g_cm3 > 0, "density_sigma_g_cm3", "must be positive")
        _need(self.molar_mass > 0, "molar_mass", "must be positive")
        _need(self.gap_ev >= 0, "gap_ev", "must not be negative")


@dataclass(frozen=True, kw_only=True, slots=True)
class Rival:
    """A strong line of an element, another element with a strong line within reach, and what tells them apart."""

    unique_by: ClassVar[tuple[str, ...]] = ("symbol", "transition", "rival")

    symbol: str
    z: int
    transition: str
    rival: str
    rival_transition: str
    away_ev: float  # the rival's line less this one
    reach_ev: float  # one standard deviation of the difference that shifts, axis and resolution leave open
    decided_by: str  # strongest line of the element, from 20 %, clear of all strong ones of the rival; or empty
    weakly_by: str  # the same from 5 to 20 %
    ruled_out_by: str  # strongest line of the rival clear of the element's: when it is absent, so is the rival
    kind: str
    source: str

    def __post_init__(self) -> None:
        _need(self.rival in WITH_LINES and self.rival != self.symbol, "rival", "must be another element from Li to U")
        _need(self.reach_ev > 0, "reach_ev", "must be positive")


@dataclass(frozen=True, kw_only=True, slots=True)
class Residue:
    """What a kind of residue brings to a surface."""

    unique_by: ClassVar[tuple[str, ...]] = ("pattern",)

    pattern: str
    needs: str  # symbols that must be new or enriched, blank between
    helps: str  # symbols that go with it
    against: str  # symbols that do not
    text: str  # what it would be
    test: str  # that could prove it
    kind: str
    source: str

    def __post_init__(self) -> None:
        for column in ("needs", "helps", "against"):
            strange = [symbol for symbol in getattr(self, column).split() if symbol not in WITH_LINES]
            _need(not strange, column, f"{strange[0] if strange else ''} is no element from Li to U")
        _need(bool(self.needs), "needs", "must name an element")
        both = set(self.needs.split()) & set(self.against.split())
        _need(not both, "against", "must not name what is needed")
        _need(bool(self.text and self.test), "test", "must say what it is and what could prove it")


# The tables that the program reads when it answers; the others serve to rebuild them.
READ: dict[str, type] = {
    "chemical_shifts.csv": ChemicalShift,
    "commonness.csv": Commonness,
    "lines.csv": Line,
    "materials.csv": Material,
    "residues.csv": Residue,
    "rivals.csv": Rival,
    "scale_lines.csv": ScaleLine,
    "sensitivities.csv": Sensitivity,
    "shift_priors.csv": ShiftPrior,
    "shift_ranges.csv": ShiftRange,
    "sources.csv": Source,
}
