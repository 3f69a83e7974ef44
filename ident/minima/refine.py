"""Refine minima in groups by least squares: energies below the step, depths shared out, widths free."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from ..signal.differential import Differential
from ..signal.lines import ASYMMETRY, line_shape
from ..spectrum import FloatArray
from .pursuit import Feature, tolerance, widest_here_ev

LARGEST_GROUP = 7
ROUNDS = 4
ONE_LINE = 1.0  # widths: minima closer than this are one line of unusual shape
DEPTH_FREEDOM = 0.5  # prior standard deviation of a depth, relative: crowded minima must not blow each other up
USUAL_LEAN, LEAN_FREEDOM, LEANS = 1.4, 0.25, (0.8, 3.0)
WIDTH_FREEDOM = 0.2  # prior standard deviation of ln sigma about the width that the search chose


def refine(
    differential: Differential,
    derivative: FloatArray,
    features: tuple[Feature, ...],
    done: tuple[tuple[Feature, float], ...] = (),
    resolution: float | None = None,
) -> tuple[tuple[Feature, float], ...]:
    """Refine features of one window; give each with the standard deviation of its energy in eV.

    Groups all of whose features are `done` are taken over as they are.
    """
    spread = dict(done)
    ordered = sorted(features, key=lambda feature: feature.energy_ev)
    out: list[tuple[Feature, float]] = []
    for group in _groups(ordered):
        if all(feature in spread for feature in group):
            out.extend((feature, spread[feature]) for feature in group)
        else:
            out.extend(_refine_group(differential, derivative, group, resolution))
    return tuple(out)


def prune(refined: tuple[tuple[Feature, float], ...]) -> tuple[tuple[Feature, float], ...]:
    """Merge features that refinement moved onto each other; drop those a stronger one's shape can account for."""
    kept: list[tuple[Feature, float]] = []
    for feature, sigma in sorted(refined, key=lambda pair: -pair[0].depth):
        twin = next((k for k, (other, _) in enumerate(kept) if _one_line(feature, other)), None)
        if twin is not None:
            other = kept[twin][0]
            merged = replace(other, depth=other.depth + 0.8 * feature.depth, significance=other.significance + 1e-9)
            kept[twin] = (merged, kept[twin][1])
            continue
        at = np.array([feature.energy_ev])
        if feature.depth > float(tolerance(at, tuple(other for other, _ in kept))[0]):
            kept.append((feature, sigma))
    return tuple(kept)


def _one_line(first: Feature, second: Feature) -> bool:
    """Whether two minima stand closer than any two lines could be told apart."""
    return abs(first.energy_ev - second.energy_ev) < ONE_LINE * max(first.sigma_ev, second.sigma_ev)


def _groups(features: list[Feature]) -> list[list[Feature]]:
    groups: list[list[Feature]] = []
    for feature in features:
        if groups:
            last = groups[-1][-1]
            near = feature.energy_ev - last.energy_ev < 2.0 * last.sigma_ev + 2.6 * ASYMMETRY * feature.sigma_ev
            if near and len(groups[-1]) < LARGEST_GROUP:
                groups[-1].append(feature)
                continue
        groups.append([feature])
    return groups


def _refine_group(
    differential: Differential, derivative: FloatArray, group: list[Feature], resolution: float | None
) -> list[tuple[Feature, float]]:
    energy = differential.energy_ev
    first, last = group[0], group[-1]
    low = int(np.searchsorted(energy, first.energy_ev - 3.0 * ASYMMETRY * first.sigma_ev - 1.0))
    high = int(np.searchsorted(energy, last.energy_ev + 2.6 * last.sigma_ev + 1.0))
    unit = max(f.depth for f in group)  # so that nothing depends on what the ordinate is counted in
    x, y = energy[low:high], derivative[low:high] / unit
    count = len(group)
    start = np.array([[f.energy_ev, np.log(f.sigma_ev), np.log(f.lean)] for f in group]).T
    position, width, lean = start.copy()
    first_depth = np.array([f.depth for f in group]) / unit
    depth = first_depth.copy()
    if x.size < 4 * count + 3:
        return [(f, 0.5 * f.sigma_ev) for f in group]
    background = np.stack([np.ones_like(x), np.linspace(-1.0, 1.0, x.size)], axis=1)
    flat, _ = np.linalg.qr(background)
    noise = max(float(np.mean(differential.sigma[low:high])) * differential.filter_gain(np.ones(1)) / unit, 1e-9)
    information = np.eye(4 * count + 2)
    for _ in range(ROUNDS):
        shapes, slopes, stretches, leanings = _jacobian(x, position, width, lean)
        design = np.concatenate([shapes, slopes * depth, stretches * depth, leanings * depth, background], axis=1)
        misfit = y - shapes @ depth
        rest = max(noise, float(np.std(misfit - flat @ (flat.T @ misfit))))
        ridge = np.concatenate(
            [
                (DEPTH_FREEDOM * first_depth) ** -2,
                np.exp(-2 * width),
                np.full(count, WIDTH_FREEDOM**-2),
                np.full(count, LEAN_FREEDOM**-2),
                np.zeros(2),
            ]
        )
        information = design.T @ design / rest**2 + np.diag(ridge)
        pull = np.concatenate(
            [
                (first_depth - depth) * (DEPTH_FREEDOM * first_depth) ** -2,
                (start[0] - position) * np.exp(-2 * width),
                (start[1] - width) / WIDTH_FREEDOM**2,
                (np.log(USUAL_LEAN) - lean) / LEAN_FREEDOM**2,
                [0, 0],
            ]
        )
        step = np.linalg.solve(information + 1e-12 * np.eye(information.shape[0]), design.T @ misfit / rest**2 + pull)
        depth = np.maximum(depth + step[:count], 0.02 * (depth > 0))
        position = position + np.clip(step[count : 2 * count], -1.5, 1.5)
        most = np.log(widest_here_ev(differential, position, resolution))
        width = np.clip(width + np.clip(step[2 * count : 3 * count], -0.3, 0.3), start[1] - 0.7, most)
        lean = np.clip(lean + np.clip(step[3 * count : 4 * count], -0.3, 0.3), *np.log(LEANS))
    spread = np.sqrt(np.clip(np.diag(np.linalg.inv(information))[count : 2 * count], 1e-6, None))
    return [
        (
            replace(f, energy_ev=float(p), depth=float(d) * unit, sigma_ev=float(np.exp(w)), lean=float(np.exp(a))),
            float(s),
        )
        for f, p, d, w, a, s in zip(group, position, depth, width, lean, spread, strict=True)
    ]


def _jacobian(
    x: FloatArray, position: FloatArray, width: FloatArray, lean: FloatArray
) -> tuple[FloatArray, FloatArray, FloatArray, FloatArray]:
    """Shapes (n, f) and their derivatives with position, with ln sigma and with ln lean."""
    sigma, leans = np.exp(width), np.exp(lean)
    offset = x[:, None] - position
    shape = line_shape(offset, sigma, leans)
    h = 0.02
    moved = line_shape(offset - h * sigma, sigma, leans)
    wider = line_shape(offset, sigma * (1.0 + h), leans)
    leaning = line_shape(offset, sigma, leans * (1.0 + h))
    return shape, (moved - shape) / (h * sigma), (wider - shape) / h, (leaning - shape) / h


def rendered(energy_ev: FloatArray, features: tuple[Feature, ...]) -> FloatArray:
    """The sum of the features' shapes on an energy axis (n,), in the units of their depths."""
    total = np.zeros_like(energy_ev)
    for feature in features:
        low = np.searchsorted(energy_ev, feature.energy_ev - 7.0 * feature.sigma_ev)
        high = np.searchsorted(energy_ev, feature.energy_ev + 4.0 * feature.sigma_ev)
        total[low:high] += feature.depth * line_shape(
            energy_ev[low:high] - feature.energy_ev, feature.sigma_ev, feature.lean
        )
    return total
