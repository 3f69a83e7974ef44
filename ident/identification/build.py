"""From a spectrum to an answer: analyse, weigh, explain, and put it together."""

from __future__ import annotations

import math
from dataclasses import asdict, dataclass, fields, replace
from typing import TYPE_CHECKING, Any

from .. import tables
from ..errors import SettingError
from ..matching.evidence import (
    AskedEvidence,
    ElementEvidence,
    Evidence,
    InseparableEvidence,
    RivalEvidence,
    StateEvidence,
    UntestableEvidence,
)
from ..matching.settings import Settings
from ..reasons import explain, explain_artefact, explain_asked, state_to_tell
from ..spectrum import Spectrum
from .answer import (
    UNCALIBRATED,
    Abundance,
    ArtefactNote,
    Assignment,
    FurtherScan,
    Identification,
    Inseparable,
    Limit,
    LineNote,
    Rival,
    Scale,
    State,
    Unexplained,
    Untestable,
    WhyNot,
    verdict_of,
)
from .cautions import cautions_for

if TYPE_CHECKING:
    from ..minima import Analysis

MOST_LOG_ODDS = 14.0  # a million to one: more means nothing
WIDE_SCAN = 2.0  # highest over lowest energy from which one relative resolution is a rough word


def identify(spectrum: Spectrum, settings: Settings | None = None, **settings_given: Any) -> Identification:
    """Name the elements that a spectrum shows.

    Parameters
    ----------
    spectrum : Spectrum
        Direct or differential, one or more windows; `Spectrum.from_arrays` makes one without a file.
    settings : Settings, optional
        What the analyst knows beside the spectrum.
    **settings_given
        The fields of `Settings` one by one instead, such as `insulator=True` or `rule_out=("Co",)`.

    Returns
    -------
    Identification
        Elements of probability 0.01 and more with reasons; `to_dict()` for JSON, `to_frame()` for a table.

    Raises
    ------
    InputError
        When the spectrum cannot be searched (too few points, constant).
    SettingError
        When a setting makes no sense.
    """
    return examine(spectrum, settings, **settings_given).answer


@dataclass(frozen=True, kw_only=True, eq=False)
class Examination:
    """An answer with what it was made of, for the questions that look further than the answer."""

    analysis: Analysis
    evidence: Evidence
    answer: Identification


def examine(spectrum: Spectrum, settings: Settings | None = None, **settings_given: Any) -> Examination:
    """Identify, and give the minima and the evidence too; parameters and errors are those of `identify`."""
    from ..matching import weigh
    from ..minima import analyse

    chosen = settings_from(settings, settings_given)
    if chosen.beam_kev is None and spectrum.header.beam_kev is not None:
        chosen = _with_beam(chosen, spectrum.header.beam_kev)
    resolution, notes = relative_resolution(spectrum, chosen)
    analysis = analyse(spectrum, resolution=resolution)
    evidence = weigh(analysis, chosen)
    return Examination(analysis=analysis, evidence=evidence, answer=assemble(analysis, evidence, chosen, notes))


def relative_resolution(spectrum: Spectrum, settings: Settings) -> tuple[float | None, tuple[str, ...]]:
    """Give the relative resolution and a warning where it stands for one in eV over a wide scan."""
    if settings.resolution_ev is None:
        return settings.resolution, ()
    ranges = spectrum.ranges_ev
    low, high = ranges[0][0], ranges[-1][1]
    middle = 0.5 * (low + high)
    if low > 0 and high / low < WIDE_SCAN:
        return settings.resolution_ev / middle, ()
    relative = settings.resolution_ev / middle
    return relative, (f"the resolution of {settings.resolution_ev:g} eV is taken as {relative:.2%} throughout",)


def assemble(analysis: Analysis, evidence: Evidence, settings: Settings, notes: tuple[str, ...] = ()) -> Identification:
    """Put an answer together from what was found and weighed."""
    spectrum = analysis.spectrum
    assignments = tuple(_assignment(element, evidence) for element in evidence.elements)
    scale = Scale(
        offset_ev=evidence.scale.offset_ev,
        offset_sigma_ev=evidence.scale.offset_sigma_ev,
        slope=evidence.scale.slope,
        slope_sigma=evidence.scale.slope_sigma,
        charging=evidence.scale.charging,
        source=_scale_source(settings),
        readings=evidence.scale.readings,
    )
    return Identification(
        spectrum=spectrum.name,
        sha256=spectrum.sha256,
        edition=edition(),
        own_tables=tables.own_tables_told(),
        settings=_told(settings),
        header=asdict(spectrum.header),
        kind=spectrum.kind,
        ranges_ev=spectrum.ranges_ev,
        scale=scale,
        minima=len(analysis.minima),
        assignments=assignments,
        inseparable=tuple(_inseparable(pair) for pair in evidence.inseparable),
        unexplained=tuple(
            Unexplained(energy_ev=u.energy_ev, significance=u.significance, candidates=u.candidates)
            for u in evidence.unexplained
        ),
        limits=tuple(
            Limit(
                element=limit.element,
                atomic_percent=limit.atomic_percent,
                line_ev=limit.line_ev,
                usual=limit.usual,
            )
            for limit in evidence.limits
        ),
        why_not=tuple(_why_not(asked, evidence) for asked in evidence.asked),
        untestable=_untestable(evidence),
        artefacts=_artefacts(analysis, evidence),
        cautions=cautions_for(assignments, scale, settings.sputtered),
        warnings=(*analysis.warnings, *notes),
    )


def _artefacts(analysis: Analysis, evidence: Evidence) -> tuple[ArtefactNote, ...]:
    """Spikes and dead points of the data, and minima that are losses or satellites, rising in energy."""
    notes = [ArtefactNote(energy_ev=a.energy_ev, what=a.what, kind=a.kind) for a in analysis.artefacts]
    notes += [ArtefactNote(energy_ev=a.energy_ev, what=explain_artefact(a), kind=a.kind) for a in evidence.artefacts]
    return tuple(sorted(notes, key=lambda note: note.energy_ev))


def _told(settings: Settings) -> dict[str, Any]:
    """Settings as plain data; of a calibration, what it says and which it is."""
    told = asdict(replace(settings, scale=None))
    scale = settings.scale
    if scale is not None:
        names = ("metals", "date", "offset_ev", "offset_sigma_ev", "slope", "slope_sigma", "within_3_ev")
        told["scale"] = {name: getattr(scale, name) for name in names}
    return told


def _scale_source(settings: Settings) -> str:
    """Say what the axis was known by beforehand."""
    known = [part.summary() for part in (settings.scale, settings.sitting) if part is not None]
    return "; ".join(known) if known else UNCALIBRATED


def edition() -> str:
    """Say which edition of program and tables made an answer."""
    from .. import __version__

    return f"ident {__version__}, tables {tables.edition()}"


def settings_from(settings: Settings | None, given: dict[str, Any]) -> Settings:
    known = {field.name for field in fields(Settings)}
    strange = sorted(set(given) - known)
    if strange:
        raise SettingError(f"{strange[0]!r} is no setting; there are {', '.join(sorted(known))}")
    for name in ("expect", "rule_out", "why_not"):
        if name in given and not isinstance(given[name], str):
            given = {**given, name: tuple(given[name])}
    return replace(settings, **given) if settings is not None else Settings(**given)


def _with_beam(settings: Settings, beam_kev: float) -> Settings:
    """Take the beam energy of the header, unless it cannot be one."""
    try:
        return replace(settings, beam_kev=beam_kev)
    except SettingError:
        return settings


def _assignment(element: ElementEvidence, evidence: Evidence) -> Assignment:
    state = state_to_tell(element)
    return Assignment(
        element=element.element,
        z=element.z,
        probability=element.probability,
        verdict=verdict_of(element.probability),
        lines=tuple(
            LineNote(
                transition=line.transition,
                expected_ev=line.expected_ev,
                sigma_ev=line.sigma_ev,
                found_ev=line.found_ev,
                share=line.share,
                status=line.status,
                relative_height=line.relative_height,
            )
            for line in element.lines
        ),
        state=_state(state) if state else None,
        reasons=explain(element, evidence),
        rivals=tuple(_rival(rival) for rival in element.rivals),
        abundance=_abundance(element),
    )


def _state(state: StateEvidence) -> State:
    two = state.second_name is not None
    return State(
        name=state.name,
        shift_ev=state.shift_ev,
        odds=None if two else math.exp(min(state.log_odds, MOST_LOG_ODDS)),
        next=None if two else state.next_name,
        second=state.second_name,
    )


def _abundance(element: ElementEvidence) -> Abundance | None:
    if element.abundance is None:
        return None
    return Abundance(atomic_percent=element.abundance.atomic_percent, factor=element.abundance.factor)


def _why_not(asked: AskedEvidence, evidence: Evidence) -> WhyNot:
    return WhyNot(
        element=asked.element,
        probability=asked.probability,
        verdict=verdict_of(asked.probability),
        reasons=explain_asked(asked, evidence),
    )


def _rival(rival: RivalEvidence) -> Rival:
    text = f"{rival.element} {rival.transition}, {abs(rival.deviation_sd):.1f} sd away"
    if rival.missing:
        transition, energy_ev, _ = rival.missing[0]
        text += f"; its line at {energy_ev:.0f} eV ({transition}) is not there"
    return Rival(element=rival.element, at_ev=rival.at_ev, text=text)


def _inseparable(group: InseparableEvidence) -> Inseparable:
    scans = tuple(
        FurtherScan(
            element=scan.element,
            transition=scan.transition,
            low_ev=scan.low_ev,
            high_ev=scan.high_ev,
            dwell=scan.dwell,
            information_bits=scan.information_bits,
        )
        for scan in group.scans
    )
    return Inseparable(elements=group.elements, at_ev=group.at_ev, settle=_settling(group), scans=scans)


def _settling(group: InseparableEvidence) -> str:
    if not group.scans:
        return "ask another technique, such as photoelectron spectroscopy: no Auger line within reach decides"
    scan = group.scans[0]
    line = f"{scan.element} {scan.transition} at {scan.line_ev:.0f} eV decides"
    longer = f"{scan.dwell:.2g} times as long as here" if scan.dwell >= 1 else "a shorter dwell will do"
    again = " again" if scan.in_range else ""
    said = f"scan {scan.low_ev:.0f} to {scan.high_ev:.0f} eV{again}, {longer}: {line}"
    if scan.element in group.elements[:2]:
        return said
    rest = " and ".join(group.elements[:2])
    return f"{said} on {scan.element} alone; between {rest} another technique must"


def _untestable(evidence: Evidence) -> tuple[Untestable, ...]:
    fixed = tuple(Untestable(element=symbol, why="too few electrons for an Auger transition") for symbol in ("H", "He"))
    rest = (u for u in evidence.untestable if u.element not in ("H", "He"))
    return fixed + tuple(Untestable(element=u.element, why=_why(u)) for u in rest)


def _why(item: UntestableEvidence) -> str:
    if item.cause == "no Auger line":
        return "too few electrons for an Auger transition"
    if item.cause == "no table line":
        return "the tables hold no line of it between 20 and 3200 eV"
    if item.cause == "coarse step":
        return "the step of the scan is too coarse for its lines"
    where = f", the strongest at {item.nearest_ev:.0f} eV" if item.nearest_ev is not None else ""
    return f"no strong line of it lies in the scan{where}"
