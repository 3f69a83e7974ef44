"""Ways in which one element could be present: which line met which minimum, hence shift and strength."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..patterns import IntArray, tilted
from ..scale import ELEMENT_SIGMA_EV
from ..spectrum import FloatArray
from .problem import Problem

ANCHOR_HEIGHT = 0.25  # only lines this strong fix an element's strength
REACH = 3.5  # standard deviations
NEIGHBOURS, MOST_RATIO_COST = (-2, -1, 0, 1), 1.0
HIDDEN_THRESHOLD = 4.5
LEAST_CHANCE = 3e-3  # floor of the chance that a line is missing for reasons not modelled
PER_ELEMENT = 6
WIDTH_LOG_SIGMA, WIDTH_CAP = 0.4, 6.0
DERIVED_PRICE = 1.5
# Heavy elements crowd below 110 eV: lines there alone are a weak claim to one (common practice, no source).
LOW_LINE_EV, LIGHT_Z, LOW_ALONE_PRICE = 110.0, 20, 1.5
LOWEST_LINE_EV, LOWEST_ALONE_PRICE = 75.0, 1.4  # and below 75 eV to any
SHARP_EV, SHARP_LOG_SIGMA = 1.6, 0.45  # what a published line on a fitted axis says of energy and ln height
CORE_PART = 0.3  # core lines move about a third as far as the valence lines of the light elements
STATE_PRICE, UNKNOWN_STATE_PRICE, LONELY_STATE_PRICE = 1.2, 2.0, 1.0
MAIN_LINE = 0.5  # an element is in the scan when a line this strong is


@dataclass(frozen=True, kw_only=True)
class Axis:
    """A trial of what all lines share."""

    offset_ev: float = 0.0
    slope: float = 0.0
    sigma_ev: float = 1.0  # what is still unknown of the axis at a line
    tilt: float = 0.0


@dataclass(frozen=True, kw_only=True, eq=False)
class Options:
    """o options; matrices are (o, f) over minima."""

    element: IntArray
    strength: FloatArray
    shift_core_ev: FloatArray
    shift_valence_ev: FloatArray
    price: FloatArray  # element, shift and missing lines together
    predicted: FloatArray  # (4, o, f), one array so that sets are summed at once; by name below
    soft: FloatArray  # cost of each minimum if a derived line of the option is all that explains it
    met: IntArray  # (o, l): minimum each line met, -1 for none

    @property
    def depth(self) -> FloatArray:
        """Predicted depth at each minimum."""
        return self.predicted[0]

    @property
    def moment(self) -> FloatArray:
        """Depth times deviation in standard deviations."""
        return self.predicted[1]

    def take(self, keep: NDArray[np.bool_] | IntArray) -> Options:
        """Some of the options."""
        rest = {name: getattr(self, name)[keep] for name in self.__dataclass_fields__ if name != "predicted"}
        return Options(predicted=self.predicted[:, keep], **rest)


def build_options(problem: Problem, axis: Axis) -> Options:
    """Every way in which each element could meet the minima on this axis, the promising ones kept."""
    pattern = problem.patterns
    place = pattern.energy_ev * (1.0 + axis.slope) + axis.offset_ev
    height = tilted(pattern.height, pattern.energy_ev, axis.tilt)
    sigma = np.hypot(pattern.sigma_ev, axis.sigma_ev)
    row, column, minimum = _anchors(problem, place, sigma)
    deviation = problem.energy_ev[minimum] - place[row, column]
    partners = _lonely_price(problem, place, sigma)[pattern.state_partner]
    shift, shift_price = _shift(problem, row, column, deviation, sigma[row, column], partners)
    valence = pattern.valence[row, column]
    core_shift = np.where(valence, CORE_PART * shift, shift)
    valence_shift = shift
    strength = problem.depth[minimum] / height[row, column]
    options = _evaluate(problem, row, strength, core_shift, valence_shift, place, height, sigma)
    price = options.price + shift_price
    options = Options(**{**options.__dict__, "price": price})
    return _promising(problem, options)


def _anchors(problem: Problem, place: FloatArray, sigma: FloatArray) -> tuple[IntArray, IntArray, IntArray]:
    """Pairs of a strong line and a minimum within the reach of shift and uncertainty."""
    pattern = problem.patterns
    inside = problem.in_range(place) & pattern.real & pattern.firm
    # the strongest line in range counts as strong, however weak beside those out of range
    best = np.max(np.where(inside, pattern.height, 0.0), axis=1, keepdims=True)
    strong = inside & (pattern.height >= ANCHOR_HEIGHT * best) & problem.testable[:, None]
    rows, columns = np.nonzero(strong)
    low = place[rows, columns] + pattern.shift_low_ev[rows, columns] - 1.5 * sigma[rows, columns]
    high = place[rows, columns] + pattern.shift_high_ev[rows, columns] + 1.5 * sigma[rows, columns]
    pair, minimum = np.nonzero((problem.energy_ev >= low[:, None]) & (problem.energy_ev <= high[:, None]))
    return rows[pair], columns[pair], minimum


def _lonely_price(problem: Problem, place: FloatArray, sigma: FloatArray) -> FloatArray:
    """What a state costs more whose partner should be seen and is not, by the partner's index; (e + 1,), last zero.

    An oxide without a trace of oxygen, with oxygen's line in the scan, is hardly one.
    """
    pattern = problem.patterns
    rows = np.arange(place.shape[0])
    strongest = np.argmax(np.where(pattern.real & problem.in_range(place), pattern.height, -1.0), axis=1)
    where, reach = place[rows, strongest], 2.0 * sigma[rows, strongest]
    scanned = problem.in_range(where) & (pattern.height[rows, strongest] > MAIN_LINE)
    low, high = pattern.shift_low_ev[rows, strongest] - reach, pattern.shift_high_ev[rows, strongest] + reach
    seen = np.searchsorted(problem.energy_ev, where + high) > np.searchsorted(problem.energy_ev, where + low)
    return np.r_[np.where(scanned & ~seen, LONELY_STATE_PRICE, 0.0), 0.0]


def _shift(
    problem: Problem,
    row: IntArray,
    column: IntArray,
    deviation: FloatArray,
    sigma: FloatArray,
    state_price: FloatArray,
) -> tuple[FloatArray, FloatArray]:
    """Shift that an anchor asks for, pulled towards the likeliest state, and the price of that state.

    A state of the table is taken as likely as the reference state, but for `state_price` (e, 2, states); a shift that
    no state explains is dearer the wider it is of what the element's chemistry allows.
    """
    pattern = problem.patterns
    low, high = pattern.shift_low_ev[row, column], pattern.shift_high_ev[row, column]
    wide = np.where(deviation < 0, np.maximum(-low / 2.0, ELEMENT_SIGMA_EV), np.maximum(high / 1.5, 0.8))
    valence = pattern.valence[row, column].astype(int)
    centre = pattern.state_shift_ev[row, valence].T  # (states, anchors)
    spread = np.hypot(pattern.state_sigma_ev[row, valence].T, 1.0)
    fixed = [np.zeros_like(deviation)], [np.full_like(deviation, ELEMENT_SIGMA_EV)]
    centre = np.concatenate([fixed[0], fixed[0], centre])
    spread = np.concatenate([fixed[1], [wide], spread])
    base = np.full(centre.shape, STATE_PRICE)
    base[0], base[1] = 0.0, UNKNOWN_STATE_PRICE
    base[2:] += state_price[row, valence].T
    with np.errstate(invalid="ignore"):
        cost = base + 0.5 * (deviation - centre) ** 2 / (spread**2 + sigma**2)
        cost = np.where(np.isfinite(spread), cost, np.inf)
    best = np.argmin(cost, axis=0)
    at = np.arange(deviation.size)
    centre, spread = centre[best, at], spread[best, at]
    shift = centre + (deviation - centre) * spread**2 / (spread**2 + sigma**2)
    return shift, base[best, at] + 0.5 * ((shift - centre) / spread) ** 2


def _evaluate(
    problem: Problem,
    row: IntArray,
    strength: FloatArray,
    core_shift: FloatArray,
    valence_shift: FloatArray,
    place: FloatArray,
    height: FloatArray,
    sigma: FloatArray,
) -> Options:
    """Predict depths at minima and price missing lines for options given by element, shift and strength."""
    pattern, count = problem.patterns, problem.energy_ev.size
    valence = pattern.valence[row]
    where = place[row] + np.where(valence, valence_shift[:, None], core_shift[:, None])
    depth = strength[:, None] * height[row]
    # the class of lines that the anchor does not belong to follows the shift only loosely
    anchored_core = (np.abs(valence_shift - core_shift) < 0.05 * np.abs(valence_shift) + 1e-6)[:, None]
    loose = np.where(valence, 1.5 + 0.7 * np.abs(core_shift)[:, None], 0.35 * np.abs(valence_shift)[:, None])
    spread = np.where(valence == anchored_core, loose, 0.0)
    reach = np.hypot(sigma[row], spread)
    log_sigma = pattern.height_log_sigma[row]
    real = pattern.real[row]
    nearest, off = np.zeros(real.shape, dtype=np.int64), np.zeros(real.shape)
    nearest[real], off[real] = _likeliest(problem, where[real], reach[real], depth[real], log_sigma[real])
    inside = problem.in_range(where) & real
    met = real & (np.abs(off) < REACH) & (depth > 0.04 * problem.depth[nearest])
    firm = pattern.firm[row]
    said = np.log(np.maximum(reach / SHARP_EV * log_sigma / SHARP_LOG_SIGMA, 1.0))
    missing = inside & ~met & firm
    price = np.zeros(real.shape)
    price[missing] = missing_price(problem, where[missing], depth[missing], log_sigma[missing])
    price = price.sum(axis=1)
    sure = met & firm
    above = [np.any(sure & (pattern.energy_ev[row] > edge), axis=1) for edge in (LOW_LINE_EV, LOWEST_LINE_EV)]
    price = price + low_alone_price(pattern.z[row], *above)
    rows = np.broadcast_to(np.arange(row.size)[:, None], met.shape)[sure]
    flat = rows * count + nearest[sure]
    size = row.size * count

    loose_said = said + _width_cost(problem, row, nearest)

    def gathered(values: FloatArray) -> FloatArray:
        return np.asarray(np.bincount(flat, weights=values[sure], minlength=size), dtype=float).reshape(row.size, count)

    return Options(
        element=row,
        strength=strength,
        shift_core_ev=core_shift,
        shift_valence_ev=valence_shift,
        price=price + problem.element_price[row],
        predicted=np.stack([gathered(depth * part) for part in (1.0, off, log_sigma, loose_said)]),
        soft=_soft_costs(problem, row, nearest, met & ~firm, off, depth, reach, log_sigma),
        met=np.where(met, nearest, -1),
    )


def low_alone_price(z: IntArray, above_low: NDArray[np.bool_], above_lowest: NDArray[np.bool_]) -> FloatArray:
    """What it costs an element to rest on low lines alone: no line met above 110 eV if heavy, above 75 eV if light."""
    heavy = np.where(above_low, 0.0, LOW_ALONE_PRICE)
    light = np.where(above_lowest, 0.0, LOWEST_ALONE_PRICE)
    return np.where(z > LIGHT_Z, heavy, light)


def _width_cost(problem: Problem, row: IntArray, nearest: IntArray) -> FloatArray:
    """How ill the width of the nearest minimum fits the line, robust."""
    ratio = np.log(problem.width_ev[nearest] / problem.line_width_ev[row]) / WIDTH_LOG_SIGMA
    return 0.5 * np.minimum(ratio**2, WIDTH_CAP)


def _soft_costs(
    problem: Problem,
    row: IntArray,
    nearest: IntArray,
    met: NDArray[np.bool_],
    off: FloatArray,
    depth: FloatArray,
    reach: FloatArray,
    log_sigma: FloatArray,
) -> FloatArray:
    """What derived lines leave a minimum to cost: they say less of energy and depth, so they explain less."""
    soft = np.full((row.size, problem.energy_ev.size), np.inf)
    ratio = np.log(problem.depth[nearest] / np.where(depth > 0, depth, problem.depth[nearest])) / log_sigma
    said = np.log(np.maximum(reach / SHARP_EV * log_sigma / SHARP_LOG_SIGMA, 1.0))
    cost = DERIVED_PRICE + 0.5 * off**2 + 0.5 * ratio**2 + said
    rows, columns = np.nonzero(met)
    np.minimum.at(soft, (rows, nearest[rows, columns]), cost[rows, columns])
    return soft


def _likeliest(
    problem: Problem, where: FloatArray, reach: FloatArray, depth: FloatArray, log_sigma: FloatArray
) -> tuple[IntArray, FloatArray]:
    """Of the minima about each place the one that suits best in energy and depth, and how far off it is.

    A line is looked for among the two nearest minima on either side: a weak one beside a strong one must not
    take the strong one's line for its own.
    """
    found, log_found = problem.energy_ev, np.log(problem.depth)
    right = np.searchsorted(found, where)
    log_depth = np.log(np.maximum(depth, 1e-300))
    best, best_off, lowest = right, np.zeros(where.shape), np.full(where.shape, np.inf)
    for step in NEIGHBOURS:
        at = np.clip(right + step, 0, found.size - 1)
        off = (found[at] - where) / np.hypot(reach, problem.sigma_ev[at])
        ratio = (log_found[at] - log_depth) / log_sigma
        cost = off * off + np.minimum(ratio * ratio, MOST_RATIO_COST) + np.where(np.abs(off) < REACH, 0.0, 1e6)
        better = cost < lowest
        best, best_off = np.where(better, at, best), np.where(better, off, best_off)
        lowest = np.where(better, cost, lowest)
    return best, best_off


def missing_price(problem: Problem, where: FloatArray, depth: FloatArray, log_sigma: FloatArray) -> FloatArray:
    """-ln of the chance that a line of this expected depth stayed under noise and neighbours."""
    seen_from = np.hypot(HIDDEN_THRESHOLD * problem.noise_at(where), problem.hidden_at(where))
    x = np.log(np.maximum(depth, 1e-300) / seen_from) / np.hypot(log_sigma, 0.2)
    chance = 1.0 / (1.0 + np.exp(np.clip(1.702 * x, -40.0, 40.0)))  # logistic stand-in for the normal integral
    return -np.log(chance + LEAST_CHANCE) + np.log(1.0 + LEAST_CHANCE)


def _promising(problem: Problem, options: Options) -> Options:
    """The best few of each element, by what they gain alone."""
    from .search import alone

    gain = alone(problem, options)
    order = np.lexsort((-gain, options.element))
    element = options.element[order]
    first = np.r_[True, element[1:] != element[:-1]]
    rank = np.arange(order.size) - np.maximum.accumulate(np.where(first, np.arange(order.size), 0))
    keep = order[(rank < PER_ELEMENT) & (gain[order] > -6.0)]
    return options.take(keep)
