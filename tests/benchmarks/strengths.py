"""Calculated heights and sensitivities beside published ones: `python -m tests.benchmarks.strengths`."""

from __future__ import annotations

import math

import numpy as np

from ident.deriving.learning import SENSITIVITIES, TERMS, learned, observations
from ident.deriving.sensitivity import Sensitiveness, sensitivities_at
from ident.tables import read_lines

BEAM_EV = 3000.0
# Scatter (ln) of the edition before, worked out the same way: strengths of one rough formula, nothing learned.
BEFORE = {"heights": 1.10, "sensitivities": 1.20}


def uncorrected() -> tuple[float, float]:
    """Scatter of published over calculated numbers before anything is learned: heights, sensitivities."""
    groups: dict[str, list[float]] = {}
    for row in observations():
        groups.setdefault(row.group, []).append(row.log_ratio)
    held = np.std(groups.pop(SENSITIVITIES))
    several = [values for values in groups.values() if len(values) > 1]
    squares = sum(float(np.sum((np.array(values) - np.mean(values)) ** 2)) for values in several)
    return math.sqrt(squares / sum(len(values) - 1 for values in several)), float(held)


def describe_heights() -> list[str]:
    """One row an element with two or more published heights: factor of the scatter before and after correction."""
    after: dict[str, list[float]] = {}
    before: dict[str, list[float]] = {}
    for row, error in learned().left_out:
        if row.group != SENSITIVITIES:
            after.setdefault(row.symbol, []).append(error)
            before.setdefault(row.symbol, []).append(row.log_ratio)
    lines = ["| element | lines | uncorrected | corrected, element left out |", "|---|---|---|---|"]
    for symbol, errors in after.items():
        if len(errors) > 1:
            raw, left = (math.exp(float(np.std(values, ddof=1))) for values in (before[symbol], errors))
            lines.append(f"| {symbol} | {len(errors)} | {raw:.1f} | {left:.1f} |")
    return lines


def describe_sensitivities(rows: list[Sensitiveness]) -> list[str]:
    """One row an element with a published sensitivity, at 3 keV."""
    lines = [
        "| element | line | published (memory) | calculated, own value left out | ratio |",
        "|---|---|---|---|---|",
    ]
    for row in rows:
        if row.published is not None:
            ratio = row.calculated / row.published
            lines.append(f"| {row.symbol} | {row.label} | {row.published:.2g} | {row.calculated:.2g} | {ratio:.2f} |")
    return lines


def main() -> None:
    """Print the whole section in Markdown."""
    elements = list(dict.fromkeys((line.z, line.symbol) for line in read_lines()))
    own = learned()
    heights, sensitivities = uncorrected()
    print("# Strengths\n\nScatter as a factor (one standard deviation), published over calculated.\n")
    print("| | before (2026.12, first tables) | first principles | corrected, left out |\n|---|---|---|---|")
    factors = [math.exp(x) for x in (BEFORE["heights"], heights, own.height_log_sigma)]
    print(f"| heights within an element | {factors[0]:.1f} | {factors[1]:.1f} | {factors[2]:.2f} |")
    factors = [math.exp(x) for x in (BEFORE["sensitivities"], sensitivities, own.sensitivity_log_sigma)]
    print(f"| sensitivities, 3 keV | {factors[0]:.1f} | {factors[1]:.1f} | {factors[2]:.2f} |")
    same, other = math.exp(own.same_shell_log_sigma), math.exp(own.other_shell_log_sigma)
    print(f"\nA height from published ones of the same shell: factor {same:.2f}; of other shells only: {other:.2f}.")
    print("Terms learned: " + ", ".join(f"{n} {c}" for n, c in zip(TERMS, own.coefficients, strict=True)) + ".")
    print(
        "\nKept: a published height as it is, else the corrected one on the scale of its shell. Sensitivities: mean of"
    )
    print("logarithms of published and calculated, else the calculated one, less the errors of its neighbours in Z.")
    print("\n## Heights, by element\n\n" + "\n".join(describe_heights()))
    print("\n## Sensitivities, by element\n\n" + "\n".join(describe_sensitivities(sensitivities_at(elements, BEAM_EV))))


if __name__ == "__main__":
    main()
