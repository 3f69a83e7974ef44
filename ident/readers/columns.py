"""Which column is the energy, and which is the ordinate."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from .names import find_sweeps, role_of, simplify
from .source import Source


@dataclass(frozen=True, kw_only=True)
class Choice:
    """The columns to read, counted from 0; more than one ordinate is summed.

    Parameters
    ----------
    energy : int or None
        None where the format has no energy column.
    warnings : tuple of str
        Says what was taken when it was not asked for.
    """

    energy: int | None
    ordinates: tuple[int, ...]
    warnings: tuple[str, ...] = ()


def choose_columns(
    names: Sequence[str], column: str | None, source: Source, *, energies: Sequence[int], passed: int = 0
) -> Choice:
    """Pick the ordinate, as asked for or the first that is one, and the energies on its left.

    Parameters
    ----------
    names : sequence of str
        Names of all columns, in order.
    column : str or None
        A name (case, blanks and punctuation forgiven), a number counted from 1, or "sum".
    energies : sequence of int
        Positions of the energy columns; empty when the format keeps the energies elsewhere.
    passed : int
        How many columns in front are no ordinates unless asked for.

    Raises
    ------
    InputError
        When there is no such column, when a name fits several, or when it is an energy.
    """
    if column is not None:
        picked = _find_column(names, column.strip(), source, energies)
        return Choice(energy=_energy_for(picked[0], energies), ordinates=tuple(picked))
    others = [at for at in range(passed, len(names)) if at not in energies]
    ordinates = [at for at in others if role_of(names[at]) == "ordinate"] or others
    if not ordinates:
        source.fail("has no ordinate column", remedy=f"the columns are {_listed(names, range(len(names)))}")
    # a column in front of the energies, beside others after them, numbers the points more often than it counts
    after = [at for at in ordinates if energies and at > energies[0]]
    taken = (after or ordinates)[0]
    return Choice(
        energy=_energy_for(taken, energies),
        ordinates=(taken,),
        warnings=tuple(_say_choice(names, taken, ordinates)),
    )


def _energy_for(ordinate: int, energies: Sequence[int]) -> int | None:
    """Return the nearest energy column on the left; else the first."""
    return max((at for at in energies if at < ordinate), default=energies[0] if energies else None)


def _say_choice(names: Sequence[str], taken: int, ordinates: Sequence[int]) -> list[str]:
    """Say which of several ordinates was taken, and what else there is."""
    if len(ordinates) < 2:
        return []
    others = [at for at in ordinates if at != taken]
    sweeps = find_sweeps(names)
    if taken in sweeps:
        return [
            f"{_listed(names, sweeps)} look like sweeps: {names[taken]!r} was taken; "
            "--column picks another, --column sum adds them up"
        ]
    return [f"column {names[taken]!r} was taken; --column picks another: {_listed(names, others)}"]


def _find_column(names: Sequence[str], column: str, source: Source, energies: Sequence[int]) -> list[int]:
    """Find a column by exact name, forgiven name, "sum", number, or beginning or part of a name."""
    wanted = simplify(column)
    sums = find_sweeps(names) if wanted == "sum" else []
    number = int(column) if column.isascii() and column.isdigit() and len(column) < 6 else 0
    tries = [
        [at for at, name in enumerate(names) if name == column],
        [at for at, name in enumerate(names) if wanted and simplify(name) == wanted],
        sums or (_all_ordinates(names, energies) if wanted == "sum" else []),
        [number - 1] if 0 < number <= len(names) else [],
        [at for at, name in enumerate(names) if wanted and simplify(name).startswith(wanted)],
        [at for at, name in enumerate(names) if wanted and wanted in simplify(name)],
    ]
    found = next((hits for hits in tries if hits), [])
    listed = _listed(names, range(len(names)))
    if not found:
        source.fail(f"has no column {column!r}", remedy=f"the columns are {listed}; name one or give its number")
    if len(found) > 1 and wanted != "sum":
        source.fail(f"several columns fit {column!r}: {_listed(names, found)}", remedy="give its number")
    if len({_energy_for(at, energies) for at in found}) > 1:
        source.fail(f"{_listed(names, found)} have energies of their own and cannot be summed", remedy="choose one")
    if found[0] in energies:
        source.fail(f"column {names[found[0]]!r} holds the energies", remedy=f"choose an ordinate among {listed}")
    return found


def _all_ordinates(names: Sequence[str], energies: Sequence[int]) -> list[int]:
    return [at for at, name in enumerate(names) if at not in energies and role_of(name) == "ordinate"]


def _listed(names: Sequence[str], positions: Sequence[int]) -> str:
    """List columns with their numbers, a long list cut."""
    shown = [f"{at + 1} {names[at]!r}" for at in positions]
    return ", ".join(shown if len(shown) <= 12 else [*shown[:11], f"and {len(shown) - 11} more"])
