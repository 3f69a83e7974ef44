"""Time of the strengths of all lines of all elements at one beam energy: `python -m tests.benchmarks.whole_table`.

The factors that no beam changes (energies, branching, mean free paths, widths) are worked out once; a beam energy then
costs ionisation cross-sections, backscattering and transfer alone.
"""

from __future__ import annotations

import statistics
import time

from ident import tables
from ident.deriving.whole import whole_table
from ident.physics.ionisation import MODELS

BEAMS_EV = (3000.0, 5000.0, 10_000.0, 20_000.0, 30_000.0)
ROUNDS = 5


def main() -> None:
    """Print the times in milliseconds."""
    elements = list(dict.fromkeys((line.z, line.symbol) for line in tables.read_lines()))
    started = time.perf_counter()
    whole = whole_table(elements)
    once = 1000.0 * (time.perf_counter() - started)
    print(f"{len(whole.transitions)} transitions of {len(elements)} elements; factors, once: {once:.0f} ms")
    for model in MODELS:
        spent = []
        for _ in range(ROUNDS):
            for beam in BEAMS_EV:
                started = time.perf_counter()
                whole.at(beam, model)
                spent.append(1000.0 * (time.perf_counter() - started))
        print(f"{model}, a beam energy: median {statistics.median(spent):.1f} ms, longest {max(spent):.1f} ms")


if __name__ == "__main__":
    main()
