"""The answers of `ident at`, `ident element`, `ident minima` and `ident tables` in plain text."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import TYPE_CHECKING

from .escape import printable
from .layout import columns, hanging, heading
from .text_assign import printable_lines

if TYPE_CHECKING:
    from ..lookup import Candidate, CardLine, ElementCard
    from ..minima import Analysis
    from ..physics.scales import EnergyScale
    from ..scale import ScaleCalibration
    from ..tables.files import TableFile

MOST_RIVALS = 3
MOST_TOLD = 3  # candidates whose reasons are written out


LEVELS = {"handbook": "handbook scale", "fermi": "Fermi level", "absolute": "absolute scale"}


def _read_as(scale: EnergyScale) -> str:
    """How energies are stated, in words."""
    told = [LEVELS.get(scale.reference, f"vacuum level, work function {scale.work_function_ev:g} eV")]
    if scale.kind == "direct":
        return ", ".join([*told, "direct maximum"])
    told.append("derivative minimum")
    if scale.separation_ev is not None:
        return ", ".join([*told, f"maximum {scale.separation_ev:g} eV below it"])
    if scale.needs_width:
        told.append(f"resolution {100 * scale.resolution:g} %" if scale.resolution else "constant resolution")
        added = {"": scale.resolution_ev, "modulation ": scale.modulation_ev, "smoothing ": scale.smoothing_ev}
        told += [f"{what}{value:g} eV" for what, value in added.items() if value]
    return ", ".join(told)


def _energy(energy_ev: float, scale: EnergyScale) -> str:
    """The handbooks give whole eV; elsewhere a tenth is worth writing."""
    return f"{energy_ev:.0f}" if scale.reference == "handbook" and not scale.needs_width else f"{energy_ev:.1f}"


def render_at(energy_ev: float, candidates: Sequence[Candidate], scale: EnergyScale) -> str:
    """Write what could be at an energy."""
    parts = [heading(f"{energy_ev:g} eV ({_read_as(scale)})")]
    if not candidates:
        return printable_lines([*parts, "  no line of any element is near"]) + "\n\n"
    rows = [
        (
            *(c.element, c.transition, _energy(c.expected_ev, scale), f"{c.deviation_ev:+.0f}", f"{c.weight:.2f}"),
            _needs(c, scale),
        )
        for c in candidates
    ]
    head = ("element", "transition", "stands at", "away", "weight", "must then be seen too (eV, of its strongest)")
    parts += columns(head, rows, right=(2, 3, 4))
    for candidate in candidates[:MOST_TOLD]:
        for place, reason in enumerate(candidate.reasons):
            parts.append(hanging(candidate.element if place == 0 else "", f"{reason.side}: {reason.text}", width=5))
    return printable_lines(parts) + "\n\n"


def _needs(candidate: Candidate, scale: EnergyScale) -> str:
    told = [f"{_energy(need.energy_ev, scale)} ({need.relative_height:.0%})" for need in candidate.needs]
    return ", ".join(told) if told else "nothing"


def render_card(card: ElementCard) -> str:
    """Write the reference card of an element."""
    parts = [heading(f"{card.element}, {card.name}, Z = {card.z}")]
    if card.untestable is not None:
        return printable_lines([*parts, hanging("", card.untestable, width=0)]) + "\n\n"
    parts.append(f"  {_read_as(card.scale)}; height 1 is its strongest line")
    rows = [
        (
            _energy(line.energy_ev, card.scale),
            line.transition,
            f"{line.relative_height:.2f}",
            f"{line.sigma_ev:.1f}",
            line.energy_kind,
            f"{line.mean_free_path_nm:.1f}",
            f"{line.depth_nm:.1f}",
            _rivals(line),
        )
        for line in card.lines
    ]
    head = ("eV", "transition", "height", "+- eV", "energy is", "path nm", "sees nm", "others near")
    parts += columns(head, rows, right=(0, 2, 3, 5, 6))
    if card.deciding is not None:
        parts.append(
            hanging("decides", f"{card.deciding.transition} at {card.deciding.energy_ev:.0f} eV: {card.deciding.why}")
        )
    parts.append(hanging("decided" if card.decided_by else "undecided", card.decision))
    if card.escape is not None:
        parts += _escape(card)
    parts += [hanging(side, text) for side, text in _shifts(card)]
    states = dict.fromkeys(line.state for line in card.lines if line.state)
    if states:
        parts.append(hanging("refers to", ", ".join(states)))
    for source in card.sources:
        doi = f", doi {source.doi}" if source.doi else ""
        parts.append(hanging("source", f"{source.key}: {source.text}{doi}"))
    return printable_lines(parts) + "\n\n"


def _shifts(card: ElementCard) -> Iterator[tuple[str, str]]:
    """Shifts of one transition on one line, in eV with their standard deviations."""
    for transition in dict.fromkeys(shift.transition for shift in card.shifts):
        own = [shift for shift in card.shifts if shift.transition == transition]
        told = ", ".join(f"{shift.state} {shift.shift_ev:+.1f} +- {shift.sigma_ev:.1f}" for shift in own)
        guess = all(shift.origin == "estimated" for shift in own)
        why = "; estimated from electronegativity and oxidation state, none is known" if guess else ""
        yield "shifts", f"{transition} by {told} eV{why}"


def _rivals(line: CardLine) -> str:
    """The likeliest rivals of a strong line, and how many more there are."""
    told = ", ".join(f"{rival.element} {rival.energy_ev:.0f}" for rival in line.rivals[:MOST_RIVALS])
    more = len(line.rivals) - MOST_RIVALS
    return f"{told} and {more} more" if more > 0 else told


def _escape(card: ElementCard) -> list[str]:
    """How deep the lines are seen from, and by which formulas."""
    escape = card.escape
    if escape is None:
        return []
    angle = f" at {escape.emission_deg:g} degrees" if escape.emission_deg else ""
    told = f"path is the mean free path in {escape.material}; sees is {escape.depth}{angle}"
    used = {line.mean_free_path_formula.split(" ")[0] for line in card.lines}
    return [hanging("depth", told), *(hanging("", text) for text in escape.formulas if text.split(" ")[0] in used)]


def render_minima(analysis: Analysis, scale: ScaleCalibration | None = None) -> str:
    """Write the minima of a spectrum, with energies on a calibrated axis beside them."""
    spectrum = analysis.spectrum
    ranges = ", ".join(f"{low:.0f} to {high:.0f} eV" for low, high in spectrum.ranges_ev)
    parts = [heading(printable(spectrum.name)), f"  {spectrum.kind} spectrum, {ranges}"]
    rows = [
        (
            f"{m.energy_ev:.1f}",
            f"{m.sigma_ev:.1f}",
            f"{m.depth:.4g}",
            f"{m.peak_to_peak:.4g}",
            f"{m.width_ev:.1f}",
            f"{m.significance:.1f}",
            *(() if scale is None else (_plus_minus(scale.corrected(m.energy_ev, m.sigma_ev)),)),
        )
        for m in analysis.minima
    ]
    if rows:
        head: tuple[str, ...] = ("minimum (eV)", "+- eV", "depth", "peak to peak", "width (eV)", "over noise")
        head += () if scale is None else ("corrected (eV)",)
        parts += columns(head, rows, right=range(len(head)))
    else:
        parts.append("  nothing stands above the noise")
    if scale is not None:
        said = f"{scale.summary()}: minima above the Fermi level as an analyser of 0.5 % would show them"
        parts.append(hanging("corrected", said))
    parts += [hanging("artefact", f"{a.energy_ev:.1f} eV, {a.what}") for a in analysis.artefacts]
    parts += [hanging("warning", printable(text)) for text in analysis.warnings]
    return printable_lines(parts) + "\n\n"


def _plus_minus(pair: tuple[float, float]) -> str:
    return f"{pair[0]:.1f} +- {pair[1]:.1f}"


def render_table_list(files: Sequence[TableFile], edition: str) -> str:
    """Write which tables there are and how long they are."""
    rows = [(file.name, str(file.rows), str(file.size_bytes)) for file in files]
    parts = [heading(f"Tables, edition {edition}"), *columns(("file", "rows", "bytes"), rows, right=(1, 2))]
    return printable_lines(parts) + "\n"
