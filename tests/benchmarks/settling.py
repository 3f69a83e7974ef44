"""Does the scan that an answer asks for settle what it could not tell? `python -m tests.benchmarks.settling`.

The same sample is measured once more on the same axis, with the window asked for dwelt on as long as asked for.
"""

from __future__ import annotations

import argparse
from collections.abc import Iterable
from dataclasses import dataclass, replace

import numpy as np

from ident import Spectrum, identify
from ident.identification import FurtherScan
from ident.spectrum import Window

from .forward import Case, Setup, build_case, draw_setup
from .samples import Constituent, draw_technical
from .seeds import NAMED
from .shapes import FloatArray

FEWEST_POINTS = 20


@dataclass(frozen=True, kw_only=True)
class Settled:
    """What became of the probability of the element whose line was looked for."""

    seed: int
    element: str
    present: bool
    before: float
    after: float
    dwell: float

    @property
    def right(self) -> bool:
        """Whether it is called now exactly when it is there."""
        return (self.after >= 0.5) == self.present


def settle(seed: int) -> list[Settled]:
    """Measure a sample directly, and for each group that cannot be told apart once more as the answer asks."""
    rng = np.random.default_rng([9, seed])
    recipe, sample = draw_technical(rng)
    setup = draw_setup(rng, "surveys", sample)
    if setup.recording.mode != "direct":
        return []
    state = rng.bit_generator.state  # from here on the lines are drawn: the same lines for every measurement
    answer = identify(_measured(state, setup, sample, recipe, seed).spectrum)
    before = {a.element: a.probability for a in answer.assignments}
    out = []
    for group in answer.inseparable:
        if not group.scans:
            continue
        scan = group.scans[0]
        after = {
            a.element: a.probability for a in identify(_again(state, setup, sample, recipe, seed, scan)).assignments
        }
        out.append(
            Settled(
                seed=seed,
                element=scan.element,
                present=scan.element in {part.element for part in sample},
                before=before.get(scan.element, 0.0),
                after=after.get(scan.element, 0.0),
                dwell=scan.dwell,
            )
        )
    return out


def _measured(state: object, setup: Setup, sample: tuple[Constituent, ...], recipe: str, seed: int) -> Case:
    rng = np.random.default_rng()
    rng.bit_generator.state = state
    return build_case(rng, setup, sample, kind="surveys", seed=seed, recipe=recipe)


def _again(
    state: object, setup: Setup, sample: tuple[Constituent, ...], recipe: str, seed: int, scan: FurtherScan
) -> Spectrum:
    """The whole scan, the window asked for in place of what was scanned there; counts divided by dwell."""
    (full,) = setup.axes_ev
    axis = np.arange(scan.low_ev, scan.high_ev, float(np.median(np.diff(full))))
    parts: list[tuple[FloatArray, float]] = [
        (full[full < axis[0]], 1.0),
        (axis, scan.dwell),
        (full[full > axis[-1]], 1.0),
    ]
    parts = [(energy, gain) for energy, gain in parts if energy.size >= FEWEST_POINTS]
    recording = replace(setup.recording, gains=tuple(gain for _, gain in parts))
    more = replace(setup, axes_ev=tuple(energy for energy, _ in parts), recording=recording)
    windows = _measured(state, more, sample, recipe, seed).spectrum.windows
    return Spectrum(
        windows=tuple(
            Window(energy_ev=window.energy_ev, intensity=window.intensity / gain)
            for window, (_, gain) in zip(windows, parts, strict=True)
        ),
        name=f"settling {seed}",
    )


def log_loss(settled: Iterable[Settled], *, after: bool) -> float:
    """Mean of -ln of the probability given to what is true."""
    losses = []
    for one in settled:
        said = min(max(one.after if after else one.before, 0.005), 0.995)
        losses.append(-np.log(said if one.present else 1.0 - said))
    return float(np.mean(losses))


def main() -> None:
    """Print the table of one set of seeds."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--count", type=int, default=200)
    parser.add_argument("--seeds", choices=sorted(NAMED), default="tuning")
    chosen = parser.parse_args()
    found = [one for seed in NAMED[chosen.seeds][: chosen.count] for one in settle(seed)]
    for one in found:
        there = "there" if one.present else "absent"
        print(f"{one.seed} {one.element:<3}{there:<7}{one.before:.2f} -> {one.after:.2f}, dwell {one.dwell:.2g}")
    right = np.mean([one.right for one in found])
    sure = np.mean([one.after < 0.1 or one.after > 0.9 for one in found])
    print(f"{len(found)} scans: {right:.2f} right, {sure:.2f} beyond 0.1 or 0.9")
    print(f"log loss {log_loss(found, after=False):.2f} before, {log_loss(found, after=True):.2f} after")


if __name__ == "__main__":
    main()
