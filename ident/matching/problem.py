"""The question put to the matcher, as arrays: minima, their price if unexplained, lines, noise, priors."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..minima import Analysis
from ..patterns import Patterns, all_patterns
from ..spectrum import FloatArray
from .losses import elastic_price
from .settings import Settings

# Prices are natural logarithms of odds. What a minimum costs when no element explains it, per its significance:
UNEXPLAINED, UNEXPLAINED_RISE = 7.0, 1.4
WEAK_RISE, WEAK_FROM = 2.4, 2.8  # near the threshold a minimum may well be noise
LOW_ENERGY_EV = 60.0
TAIL_PART, TAIL_REACH_EV = 0.25, 23.0  # losses below a strong line
SATELLITE_PART, SATELLITE_NEAR_EV = 0.12, 11.0  # satellites above it
SATELLITE_FAR_PART, SATELLITE_REACH_EV = 0.04, 35.0  # and steps
CLEAR_OF_THEM = 5.3  # times as deep as that, a minimum asks for an element in full
SPLIT_WIDTHS, SPLIT_PRICE = 0.7, 3.0
ELEMENT_PRICE, COMMONNESS_WEIGHT, EVEN_PRICE = 2.3, 0.9, 6.0
# After sputtering its gas is often there, and carbon and oxygen are not taken for granted (common practice, no source).
SPUTTER_GAS_LOG_ODDS, SPUTTERED_AIR_LOG_ODDS, FROM_AIR = 0.0, 0.0, ("C", "O")
EXPECTED_BONUS, EXPECTED_PRICE = 2.5, 0.6  # what is expected is as likely as carbon and oxygen, however rare it is
USUAL_RESOLUTION = 0.0055


@dataclass(frozen=True, kw_only=True, eq=False)
class Problem:
    """Minima (f,) rising in energy, and lines (e, l) of the elements considered."""

    energy_ev: FloatArray
    sigma_ev: FloatArray
    depth: FloatArray
    significance: FloatArray
    width_ev: FloatArray  # (f,) full widths
    line_width_ev: FloatArray  # (e, l) widths that lines should show on this instrument
    price: FloatArray  # of leaving each minimum unexplained
    patterns: Patterns
    element_price: FloatArray  # (e,)
    testable: NDArray[np.bool_]  # (e,)
    ranges_ev: tuple[tuple[float, float], ...]
    noise_energy_ev: FloatArray  # joined over the windows, rising
    noise_depth: FloatArray
    floor_depth: FloatArray  # depth that strong minima could hide, on the same axis
    settings: Settings
    ordinate: str  # "n", "en" or "auto"

    def noise_at(self, energy_ev: FloatArray) -> FloatArray:
        """Noise of the depth of an ordinary line; any shape in eV."""
        return np.interp(energy_ev, self.noise_energy_ev, self.noise_depth)

    def hidden_at(self, energy_ev: FloatArray) -> FloatArray:
        """Depth that could stand there without showing as a minimum of its own; any shape in eV."""
        return np.interp(energy_ev, self.noise_energy_ev, self.floor_depth)

    def in_range(self, energy_ev: FloatArray) -> NDArray[np.bool_]:
        """Whether a line there would have been seen: inside a window and clear of its ends."""
        inside = np.zeros(np.shape(energy_ev), dtype=bool)
        for low, high in self.ranges_ev:
            edge = min(8.0, 0.12 * (high - low))
            inside |= (energy_ev >= low + 0.5 * edge) & (energy_ev <= high - edge)
        return inside


def pose(analysis: Analysis, settings: Settings) -> Problem:
    """Turn an analysis into arrays."""
    minima = analysis.minima
    energy = np.array([m.energy_ev for m in minima])
    depth = np.array([m.depth for m in minima])
    significance = np.array([m.significance for m in minima])
    width = np.array([m.width_ev for m in minima])
    patterns = all_patterns()
    grid = np.concatenate([noise.energy_ev for noise in analysis.depth_noise])
    noise = np.concatenate([noise.noise for noise in analysis.depth_noise])
    order = np.argsort(grid, kind="stable")
    grid, noise = grid[order], noise[order]
    price = _element_price(patterns, settings)
    testable = np.array([symbol not in settings.rule_out for symbol in patterns.symbols])
    return Problem(
        energy_ev=energy,
        sigma_ev=np.array([m.sigma_ev for m in minima]),
        depth=depth,
        significance=significance,
        width_ev=width,
        line_width_ev=_line_widths(patterns, analysis, settings),
        price=elastic_price(energy, _own_price(energy, depth, significance, width), settings.beam_kev),
        patterns=patterns,
        element_price=price,
        testable=testable,
        ranges_ev=analysis.spectrum.ranges_ev,
        noise_energy_ev=grid,
        noise_depth=noise,
        floor_depth=_hidden_depth(grid, energy, depth, width),
        settings=settings,
        ordinate=analysis.spectrum.ordinate,
    )


def _line_widths(patterns: Patterns, analysis: Analysis, settings: Settings) -> FloatArray:
    """Natural width, analyser and step in quadrature."""
    resolution = settings.resolution or USUAL_RESOLUTION
    step = float(np.median([differential.step_ev for differential in analysis.differentials]))
    return np.sqrt(patterns.width_ev**2 + (resolution * patterns.energy_ev) ** 2 + (1.5 * step) ** 2)


def _own_price(energy: FloatArray, depth: FloatArray, significance: FloatArray, width: FloatArray) -> FloatArray:
    """Price of every minimum there is, (f,)."""
    price = unexplained_price(energy, depth, significance, aside_depth(energy, energy, depth))
    # a line of unusual shape is found as two minima closer than two lines would often be
    near = np.abs(energy[None, :] - energy[:, None]) < SPLIT_WIDTHS * width[None, :]
    split = near & (depth[None, :] > depth[:, None])
    return np.where(np.any(split, axis=1), np.minimum(price, SPLIT_PRICE), price)


def unexplained_price(energy: FloatArray, depth: FloatArray, significance: FloatArray, aside: FloatArray) -> FloatArray:
    """What a minimum of this energy, depth and significance costs unexplained; any shapes that go together.

    Less near the secondary edge, much less where it is no deeper than losses and satellites would be (`aside`).
    """
    price = UNEXPLAINED + UNEXPLAINED_RISE * np.log(np.maximum(significance, 1.0) / 5.0)
    price = np.minimum(price, WEAK_RISE * np.maximum(significance - WEAK_FROM, 0.2))
    price = price * np.clip(0.35 + 0.65 * (energy - 25.0) / (LOW_ENERGY_EV - 25.0), 0.35, 1.0)
    clear = np.log(np.maximum(depth, 1e-300)) - np.log(np.maximum(aside, 1e-300))
    scale = np.clip(clear / np.log(CLEAR_OF_THEM), 0.0, 1.0)
    return np.maximum(1.0, price * (0.15 + 0.85 * scale))


def aside_depth(energy: FloatArray, found_ev: FloatArray, found_depth: FloatArray) -> FloatArray:
    """How deep a loss or a satellite of the minima found is likely to be at an energy; any shape."""
    below = found_ev - energy[..., None]  # strong minus this one
    tail = np.where((below > 0) & (below < TAIL_REACH_EV), TAIL_PART, 0.0)
    satellite = np.interp(
        -below, (0.0, SATELLITE_NEAR_EV, SATELLITE_REACH_EV), (SATELLITE_PART, SATELLITE_PART, SATELLITE_FAR_PART)
    )
    satellite = np.where((below < 0) & (-below < SATELLITE_REACH_EV), satellite, 0.0)
    likely: FloatArray = np.max((tail + satellite) * found_depth, axis=-1, initial=0.0)
    return likely


def _hidden_depth(grid: FloatArray, energy: FloatArray, depth: FloatArray, width: FloatArray) -> FloatArray:
    """What the shape of each minimum could swallow beside it."""
    if not energy.size:
        return np.zeros_like(grid)
    away = (grid[None, :] - energy[:, None]) / (0.55 * width[:, None])
    near = 0.45 * np.exp(-0.5 * (away / 1.3) ** 2)
    far = 0.07 * np.exp(-0.5 * (away / np.where(away < 0, 5.0, 3.5)) ** 2)
    return np.max(depth[:, None] * np.maximum(near, far), axis=0)


def prior_log_odds(patterns: Patterns, settings: Settings) -> FloatArray:
    """How likely each element is before its lines are looked at (e,), natural log odds."""
    odds = patterns.prior_log_odds
    if settings.sputtered is None:
        return odds
    gas = np.array([symbol == settings.sputtered for symbol in patterns.symbols])
    air = np.array([symbol in FROM_AIR for symbol in patterns.symbols])
    odds = np.where(air, np.minimum(odds, SPUTTERED_AIR_LOG_ODDS), odds)
    return np.where(gas, np.maximum(odds, SPUTTER_GAS_LOG_ODDS), odds)


def _element_price(patterns: Patterns, settings: Settings) -> FloatArray:
    if settings.commonness:
        price = ELEMENT_PRICE - COMMONNESS_WEIGHT * prior_log_odds(patterns, settings)
    else:
        price = np.full(len(patterns.symbols), EVEN_PRICE)
    expected = np.array([symbol in settings.expect for symbol in patterns.symbols])
    return np.where(expected, np.minimum(price - EXPECTED_BONUS, EXPECTED_PRICE), price)
