"""What the analyst tells the matcher beside the spectrum."""

from __future__ import annotations

import math
from dataclasses import dataclass

from ..errors import SettingError
from ..names import symbol_from_name
from ..scale import ScaleCalibration, Sitting

BEAM_KEV = (0.1, 50.0)  # what electron guns for this job give
RESOLUTION = (1e-5, 0.05)
RESOLUTION_EV = (0.01, 20.0)
NO_AUGER_LINE = ("H", "He")
SAID = {"beam_kev": "beam energy", "resolution_ev": "resolution"}


@dataclass(frozen=True, kw_only=True)
class Settings:
    """Settings of one identification, checked.

    Raises
    ------
    SettingError
        When a number is outside what can be, or the names contradict each other.
    UnknownNameError
        When `sputtered` or a name in `expect`, `rule_out` or `why_not` is no element.
    """

    sputtered: str | None = None  # gas that the surface was sputtered with last: some of it stays, carbon goes
    beam_kev: float | None = None  # primary energy; the header's, or unknown, when None
    insulator: bool = False  # the axis may be off by tens of eV
    commonness: bool = True  # use the prior of how often each element is met on surfaces
    expect: tuple[str, ...] = ()  # symbols that are likelier than usual
    rule_out: tuple[str, ...] = ()  # symbols that cannot be there
    why_not: tuple[str, ...] = ()  # symbols to say of why they are not named; they change no judgement
    resolution: float | None = None  # relative, 0.005 for 0.5 %
    resolution_ev: float | None = None  # absolute, eV
    scale: ScaleCalibration | None = None  # calibration of the axis, instead of what axes usually are
    sitting: Sitting | None = None  # what other spectra of the same sitting say of the axis, `scale` included

    def __post_init__(self) -> None:
        _check("beam_kev", self.beam_kev, BEAM_KEV, "keV")
        _check("resolution", self.resolution, RESOLUTION, "(0.005 for 0.5 %)")
        _check("resolution_ev", self.resolution_ev, RESOLUTION_EV, "eV")
        if self.resolution is not None and self.resolution_ev is not None:
            raise SettingError("a resolution is either relative or in eV, not both; give one of them")
        if self.scale is not None and not isinstance(self.scale, ScaleCalibration):
            raise SettingError("scale is a calibration, such as calibrate_scale or load_scale give")
        if self.sitting is not None and not isinstance(self.sitting, Sitting):
            raise SettingError("sitting is what find_sittings gives of an axis; use identify_together")
        if self.sputtered is not None:
            object.__setattr__(self, "sputtered", symbol_from_name(self.sputtered))
        object.__setattr__(self, "expect", _symbols("expect", self.expect))
        object.__setattr__(self, "rule_out", _symbols("rule_out", self.rule_out))
        object.__setattr__(self, "why_not", _symbols("why_not", self.why_not))
        both = sorted(set(self.expect) & set(self.rule_out))
        if both:
            raise SettingError(f"{', '.join(both)} cannot be expected and ruled out at once; take it out of one list")
        never = [symbol for symbol in self.expect if symbol in NO_AUGER_LINE]
        if never:
            raise SettingError(f"{never[0]} has too few electrons for an Auger transition; it cannot be expected")


def _check(name: str, value: float | None, limits: tuple[float, float], unit: str) -> None:
    if value is None:
        return
    low, high = limits
    if not (math.isfinite(value) and low <= value <= high):
        said = SAID.get(name, name)
        raise SettingError(f"{said} {value:g} is out of the question; it lies between {low:g} and {high:g} {unit}")


def _symbols(setting: str, names: tuple[str, ...] | str) -> tuple[str, ...]:
    if isinstance(names, str):
        raise SettingError(f"{setting} is a sequence of names, such as ('C', 'oxygen'), not one text")
    return tuple(dict.fromkeys(symbol_from_name(name) for name in names))
