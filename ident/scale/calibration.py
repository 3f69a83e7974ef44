"""What a calibration of the energy axis is: offset, slope, how sure they are, and the lines they rest on."""

from __future__ import annotations

import math
from dataclasses import asdict, dataclass
from typing import Any, Literal

import numpy as np

from .axis import AxisPrior

SCHEMA = 1
WHAT = "energy scale"
LIMIT_EV = 3.0  # what ISO 17973 aims at for medium resolution, and calls adequate for identifying peaks
SURE = 2.0  # standard deviations
# Between the calibration and the spectrum it serves the axis may move so much (common practice, no source).
DRIFT_EV, DRIFT_SLOPE = 0.5, 2e-4

Answer = Literal["yes", "no", "cannot tell"]
Covariance = tuple[tuple[float, float], tuple[float, float]]


@dataclass(frozen=True, kw_only=True)
class CalibrationLine:
    """One reference line, and the minimum that it was found at."""

    metal: str
    transition: str
    expected_ev: float  # minimum above the Fermi level, as wide as it was recorded
    found_ev: float  # on the spectrum's own axis
    sigma_ev: float  # of both together
    residual_ev: float  # found less what the fitted scale gives
    used: bool  # False: too far off, set aside
    status: str  # how the reference energy is known: read or from memory
    source: str


@dataclass(frozen=True, kw_only=True)
class Deviation:
    """How far too high the axis reads at an energy."""

    energy_ev: float
    deviation_ev: float
    sigma_ev: float


@dataclass(frozen=True, kw_only=True)
class ScaleCalibration:
    """An energy axis against the Fermi level: axis = energy + offset + slope * energy, in eV."""

    schema: int = SCHEMA
    what: str = WHAT
    offset_ev: float
    offset_sigma_ev: float
    slope: float
    slope_sigma: float
    covariance: Covariance  # of offset in eV and slope
    # What the recorded widths add to the minima, against an analyser of 0.5 % (the tables' scale): offset + slope * E.
    broadening_offset_ev: float
    broadening_slope: float
    slope_from: Literal["lines", "mostly what is usual"]
    chi2: float
    degrees_of_freedom: int
    metals: tuple[str, ...]
    lines: tuple[CalibrationLine, ...]
    spectra: tuple[str, ...]
    range_ev: tuple[float, float]  # of all spectra together
    within_3_ev: Answer  # over that range
    worst: Deviation  # where in that range it is worst, two standard deviations included
    deciding: str  # the line without which the worst place would be least sure
    date: str  # ISO 8601
    edition: str  # of the tables
    notes: tuple[str, ...]

    def at(self, energy_ev: float) -> Deviation:
        """Give how far too high the axis reads at an energy above the Fermi level."""
        leverage = np.array([1.0, energy_ev])
        variance = float(leverage @ np.array(self.covariance) @ leverage)
        return Deviation(
            energy_ev=energy_ev,
            deviation_ev=self.offset_ev + self.slope * energy_ev,
            sigma_ev=math.sqrt(max(variance, 0.0)),
        )

    def prior(self) -> AxisPrior:
        """Give what it says of another spectrum's axis, against the minima of the tables, drift allowed for."""
        drift = np.diag([DRIFT_EV**2, DRIFT_SLOPE**2])
        return AxisPrior(
            offset_ev=self.offset_ev + self.broadening_offset_ev,
            slope=self.slope + self.broadening_slope,
            covariance=np.array(self.covariance) + drift,
        )

    def corrected(self, found_ev: float, sigma_ev: float = 0.0) -> tuple[float, float]:
        """Bring a minimum to the tables' scale (Fermi level, 0.5 %): its energy and standard deviation, in eV."""
        prior = self.prior()
        energy_ev = (found_ev - prior.offset_ev) / (1.0 + prior.slope)
        leverage = np.array([1.0, energy_ev])
        return energy_ev, math.hypot(sigma_ev, math.sqrt(float(leverage @ prior.covariance @ leverage)))

    def summary(self) -> str:
        """Say in a few words what it is."""
        return f"calibrated with {', '.join(self.metals)} on {self.date}"

    def to_dict(self) -> dict[str, Any]:
        """Give it as plain data, which is what a scale file holds."""
        return asdict(self)


def judge(deviations: list[Deviation]) -> tuple[Answer, Deviation]:
    """Say whether all deviations keep to the limit, and which is worst, two standard deviations included."""
    worst = max(deviations, key=lambda d: abs(d.deviation_ev) + SURE * d.sigma_ev)
    if abs(worst.deviation_ev) + SURE * worst.sigma_ev <= LIMIT_EV:
        return "yes", worst
    beyond = [d for d in deviations if abs(d.deviation_ev) - SURE * d.sigma_ev > LIMIT_EV]
    if beyond:
        return "no", max(beyond, key=lambda d: abs(d.deviation_ev) - SURE * d.sigma_ev)
    return "cannot tell", worst
