"""What is written at each minimum of a figure, and where: labels stand upright under the curve, side by side.

Placing is a problem in one dimension: each label wants to stand at its minimum, none may come nearer to the next than
their widths, and their order is that of the minima, so that no leader line crosses another.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

from .palette import Role

if TYPE_CHECKING:
    from ..identification import Assignment, Identification, LineNote

UNLABELLED = ("loss tail", "satellite", "secondaries")  # what minima may be; in the list beside, not on the curve
SHARED_FROM = 0.1  # part of a minimum from which an element is named at it
RIVAL_FROM = 0.25  # probability from which another element that rests on the minimum is named too
MOST_NAMES = 3
# ranks: an element's strongest minimum is labelled whatever else must go, then what is no line or has no name
STRONGEST, DOUBT, ORDINARY = 2.0, 1.6, 0.0


@dataclass(frozen=True, kw_only=True)
class Label:
    """What is written at one energy, in eV on the axis of the spectrum."""

    energy_ev: float
    text: tuple[str, ...]  # one entry a line of writing
    role: Role
    shared: bool = False
    rank: float = ORDINARY  # those of low rank go first when there is no room


@dataclass(frozen=True, kw_only=True)
class _Claim:
    assignment: Assignment
    line: LineNote
    strongest: bool


def labels_of(answer: Identification) -> tuple[Label, ...]:
    """Say what is written at each minimum, rising in energy."""
    claims = _claims([a for a in answer.assignments if a.verdict in ("present", "likely")])
    doubtful = _claims([a for a in answer.assignments if a.verdict == "possible"])
    left = {item.energy_ev for item in answer.unexplained}
    labels = [
        _claimed(energy, found, _rivals(doubtful.get(energy, [])), poorly=energy in left)
        for energy, found in claims.items()
    ]
    for energy in sorted((set(doubtful) | left) - set(claims)):
        labels.append(_doubted(energy, doubtful.get(energy, []), energy in left))
    taken = {label.energy_ev for label in labels}
    labels.extend(
        Label(energy_ev=note.energy_ev, text=(f"{note.kind} {note.energy_ev:.0f} eV",), role="artefact", rank=DOUBT)
        for note in answer.artefacts
        if note.kind not in UNLABELLED and note.energy_ev not in taken
    )
    return tuple(sorted(labels, key=lambda label: label.energy_ev))


def _claims(assignments: Sequence[Assignment]) -> dict[float, list[_Claim]]:
    """Who claims the minimum at each energy, the largest share first; each element once a minimum."""
    claims: dict[float, list[_Claim]] = {}
    for assignment in assignments:
        met = [line for line in assignment.lines if line.found_ev is not None]
        seen: set[float] = set()
        for place, line in enumerate(met):
            energy = line.found_ev
            if energy is None or energy in seen or (place > 0 and (line.share or 0.0) < SHARED_FROM):
                continue
            seen.add(energy)
            claims.setdefault(energy, []).append(_Claim(assignment=assignment, line=line, strongest=place == 0))
    for found in claims.values():
        found.sort(key=lambda claim: (-(claim.line.share or 0.0), -claim.assignment.probability))
    return claims


def _name(claim: _Claim) -> str:
    return f"{claim.assignment.element} {claim.line.transition}"


def _rivals(claims: list[_Claim]) -> list[str]:
    """The likeliest of the elements that rest on a minimum which others claim, where it is nearly as likely."""
    resting = [c for c in claims if c.strongest and c.assignment.probability >= RIVAL_FROM]
    likeliest = sorted(resting, key=lambda claim: -claim.assignment.probability)[:1]
    return [f"or {_name(claim)}?" for claim in likeliest]


def _claimed(energy_ev: float, claims: list[_Claim], rivals: list[str], *, poorly: bool) -> Label:
    """A minimum that elements which are present or likely claim; those whose strongest it is are never left out.

    `poorly`: the claim explains it no better than leaving it unexplained would.
    """
    shown = sorted(claims, key=lambda claim: not claim.strongest)[: max(MOST_NAMES, sum(c.strongest for c in claims))]
    shown.sort(key=claims.index)
    more = len(claims) - len(shown)
    text = [_name(claim) if place == 0 else f"+ {_name(claim)}" for place, claim in enumerate(shown)]
    surest = max(claim.assignment.probability for claim in claims)
    role: Role = "present" if any(claim.assignment.verdict == "present" for claim in claims) else "likely"
    strongest = any(claim.strongest for claim in claims)
    return Label(
        energy_ev=energy_ev,
        text=(*text, *([f"+ {more} more"] if more else []), *rivals),
        role="unexplained" if poorly else role,
        shared=len(claims) > 1,
        rank=surest + max(claim.line.relative_height for claim in claims) + (STRONGEST if strongest else ORDINARY),
    )


def _doubted(energy_ev: float, claims: list[_Claim], unexplained: bool) -> Label:
    """A minimum that no element which is present or likely explains."""
    likeliest = sorted(claims, key=lambda claim: -claim.assignment.probability)[: 1 if unexplained else 2]
    text = [f"{_name(claim)}?" if place == 0 else f"or {_name(claim)}?" for place, claim in enumerate(likeliest)]
    if unexplained:
        text.insert(0, f"unexplained {energy_ev:.0f} eV")
    best = max((claim.assignment.probability for claim in claims), default=0.0)
    role: Role = "unexplained" if unexplained else "possible"
    return Label(energy_ev=energy_ev, text=tuple(text), role=role, rank=DOUBT if unexplained else best)


def fitting(labels: Sequence[Label], widths: Sequence[float], room: float) -> tuple[int, ...]:
    """Say which labels have room side by side (indices, rising): those of the lowest rank go first."""
    kept = sorted(range(len(labels)), key=lambda at: -labels[at].rank)
    while kept and sum(widths[at] for at in kept) > room:
        kept.pop()
    return tuple(sorted(kept))


def spread(wanted: Sequence[float], widths: Sequence[float], low: float, high: float) -> tuple[float, ...]:
    """Place labels side by side, as near as can be to where they want to be.

    Parameters
    ----------
    wanted : (n,) sequence
        Where each label's centre wants to be, rising, in any unit of length.
    widths : (n,) sequence
        Width of each label, same unit; together at most `high - low`.
    low, high : float
        Where the first label may begin and the last one end.

    Returns
    -------
    (n,) tuple of float
        Centres. The sum of squared moves is the least that keeps the labels apart and inside (pool adjacent
        violators: Barlow et al., Statistical Inference under Order Restrictions, 1972).
    """
    runs: list[tuple[list[int], float]] = []  # members, where the run begins
    for at in range(len(wanted)):
        members = [at]
        begin = _begin(members, wanted, widths, low, high)
        while runs and runs[-1][1] + sum(widths[m] for m in runs[-1][0]) >= begin:
            members = runs.pop()[0] + members
            begin = _begin(members, wanted, widths, low, high)
        runs.append((members, begin))
    return tuple(centre for members, begin in runs for centre in _centres(members, begin, widths))


def interleaved(extents: Sequence[tuple[float, float]]) -> tuple[tuple[int, ...], ...]:
    """Group labels whose extents, from minimum to label, overlap: they must hang at one height."""
    groups: list[list[int]] = []
    reach = 0.0
    for at, (low, high) in enumerate(extents):
        if groups and low < reach:
            groups[-1].append(at)
            reach = max(reach, high)
        else:
            groups.append([at])
            reach = high
    return tuple(tuple(group) for group in groups)


def _begin(members: Sequence[int], wanted: Sequence[float], widths: Sequence[float], low: float, high: float) -> float:
    """Where a run begins so that its labels are moved least, inside the limits."""
    total, moves = 0.0, 0.0
    for member in members:
        moves += wanted[member] - (total + 0.5 * widths[member])
        total += widths[member]
    return max(low, min(moves / len(members), high - total))


def _centres(members: Sequence[int], begin: float, widths: Sequence[float]) -> tuple[float, ...]:
    out = []
    for member in members:
        out.append(begin + 0.5 * widths[member])
        begin += widths[member]
    return tuple(out)
