"""The question: a spectrum and labels in, a second opinion out."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from dataclasses import replace
from typing import TYPE_CHECKING, Any

from ..identification import examine
from ..matching.settings import Settings
from ..names import name_of
from ..reasons import Reason
from ..spectrum import Spectrum
from .answer import VERDICTS, LabelOpinion, Missed, Recheck, Verdict
from .judge import NO_LINES, Judgement, judge, reason
from .listing import Label, LabelsLike, labels_of
from .notation import LabelReading, Part, read_label, said, said_in_names
from .scene import LIKELY, POSSIBLE, Scene

if TYPE_CHECKING:
    from ..identification import Identification

SEVERITY: tuple[Verdict, ...] = ("agrees", "undecided", "disagrees", "impossible")
FITS_EV = 6.0  # a label nearer than that to its element's line was read on this scale
SHIFTED_AXIS_EV = 5.0  # from which it matters whether labels are on the spectrum's axis or on that of the tables


def recheck(spectrum: Spectrum, labels: LabelsLike, settings: Settings | None = None, **settings_given: Any) -> Recheck:
    """Give a second opinion on somebody else's labels. They never influence it.

    Parameters
    ----------
    spectrum : Spectrum
        As for `identify`.
    labels : path or iterable
        A file of labels (see `ident.read_labels`), or texts and (energy in eV, text) pairs. Energies are on
        the axis of the spectrum.
    settings, **settings_given
        As for `identify`.

    Returns
    -------
    Recheck
        A verdict with reasons per label, and the elements that no label names; `to_dict()` for JSON.

    Raises
    ------
    InputError
        When the labels cannot be read, or the spectrum cannot be searched.
    SettingError
        When a setting makes no sense, or an item is no label.
    """
    given = labels_of(labels)
    readings = [read_label(label.text) for label in given]
    scene, answer = _examined(spectrum, readings, settings, settings_given)
    shift, note = _common_scale(scene, given, readings)
    capitals = _writes_capitals(given)
    opinions = tuple(
        _opinion(scene, label, reading, shift=shift, capitals=capitals)
        for label, reading in zip(given, readings, strict=True)
    )
    missed = _missed(answer, {symbol for opinion in opinions for symbol in opinion.elements})
    counts = Counter(opinion.verdict for opinion in opinions)
    return Recheck(
        spectrum=answer.spectrum,
        sha256=answer.sha256,
        edition=answer.edition,
        own_tables=answer.own_tables,
        settings=answer.settings,
        labels=opinions,
        missed=tuple(item for item in missed if item.probability >= LIKELY),
        perhaps_missed=tuple(item for item in missed if POSSIBLE <= item.probability < LIKELY),
        counts={verdict: counts[verdict] for verdict in VERDICTS},
        cautions=answer.cautions,
        warnings=(*answer.warnings, *note),
        opinion=answer,
    )


def _examined(
    spectrum: Spectrum, readings: Sequence[LabelReading], settings: Settings | None, given: dict[str, Any]
) -> tuple[Scene, Identification]:
    """Examine, asking for reasons on the elements named; to ask changes no judgement."""
    base = settings if settings is not None else Settings()
    named = {part.symbol for reading in readings for way in reading.ways for part in way} - set(NO_LINES)
    before = replace(base, why_not=given.get("why_not", base.why_not)).why_not
    asked = tuple(dict.fromkeys([*before, *sorted(named)]))
    examined = examine(spectrum, base, **{**given, "why_not": asked})
    answer = replace(
        examined.answer,
        settings={**examined.answer.settings, "why_not": before},
        why_not=examined.answer.why_not[: len(before)],
    )
    return Scene(examined), answer


def _common_scale(
    scene: Scene, labels: Sequence[Label], readings: Sequence[LabelReading]
) -> tuple[bool, tuple[str, ...]]:
    """Tell whether the energies are those of the tables instead of the axis, which matters when it is far off."""
    offset = scene.examined.evidence.scale.offset_ev
    if abs(offset) < SHIFTED_AXIS_EV:
        return False, ()
    fits_axis = fits_tables = 0
    for label, reading in zip(labels, readings, strict=True):
        if label.energy_ev is None or not reading.clear:
            continue
        met = [
            line.found_ev
            for part in reading.ways[0]
            if part.symbol in scene.weighed and scene.probability(part.symbol) >= LIKELY
            for line in scene.weighed[part.symbol].lines
            if line.found_ev is not None
        ]
        fits_axis += any(abs(found - label.energy_ev) <= FITS_EV for found in met)
        fits_tables += any(abs(found - scene.on_axis(label.energy_ev)) <= FITS_EV for found in met)
    if fits_tables <= max(fits_axis, 1):
        return False, ()
    text = f"the labels' energies were read as those of the tables; the axis is {offset:+.1f} eV off them"
    return True, (text,)


def _writes_capitals(labels: Sequence[Label]) -> bool:
    """Whether somebody writes FE and AG, so that CO and NI are meant as Co and Ni."""
    found = [way for label in labels for way in [read_label(label.text)] if way.clear]
    texts = {label.text.split()[0].rstrip("0123456789") for label in labels if label.text.split()}
    symbols = {part.symbol for reading in found for part in reading.ways[0] if len(part.symbol) == 2}
    return any(text.isupper() and len(text) == 2 and text.capitalize() in symbols for text in texts)


def _opinion(scene: Scene, label: Label, reading: LabelReading, *, shift: bool, capitals: bool) -> LabelOpinion:
    energy = label.energy_ev
    place = scene.on_axis(energy) if shift and energy is not None else energy
    way = _way(scene, reading, place, capitals)
    if way is None:
        return _unreadable(scene, label, reading, place)
    judged = _judge_parts(scene, way, place)
    notes = _notes(way, reading)
    told = [(part, item) for part, item in judged if item.verdict != "agrees"] or judged
    order = sorted(told, key=lambda pair: -SEVERITY.index(pair[1].verdict))
    verdict = _verdict([item.verdict for _, item in judged], reading.either)
    return LabelOpinion(
        energy_ev=energy,
        label=label.text,
        read_as=said(way, reading.either),
        elements=tuple(part.symbol for part in way),
        verdict=verdict,
        better=_better(judged, verdict),
        choices=(),
        probability=(max if reading.either else min)((item.probability or 0.0 for _, item in judged), default=None),
        minimum_ev=next((item.minimum_ev for _, item in judged if item.minimum_ev is not None), None),
        reasons=(*_told([*order, *[pair for pair in judged if pair not in order]]), *notes),
        line=label.line,
    )


def _verdict(verdicts: Sequence[Verdict], either: bool) -> Verdict:
    """The worst of several elements; the best where a label says one or the other."""
    choose = min if either else max
    return choose(verdicts, key=SEVERITY.index)


def _better(judged: Sequence[tuple[Part, Judgement]], verdict: Verdict) -> tuple[str, ...]:
    named = {part.symbol for part, _ in judged}
    found = [symbol for _, item in judged for symbol in item.better if symbol not in named]
    return tuple(dict.fromkeys(found)) if verdict != "agrees" else ()


def _judge_parts(scene: Scene, way: Sequence[Part], energy_ev: float | None) -> list[tuple[Part, Judgement]]:
    """Judge each element; of several, only those with a line near are judged at the energy (Si of SiO2 at 1606)."""
    near = [_is_near(scene, part.symbol, energy_ev) for part in way]
    if len(way) == 1 or not any(near):
        near = [True] * len(way)
    return [(part, judge(scene, part, energy_ev if here else None)) for part, here in zip(way, near, strict=True)]


def _is_near(scene: Scene, symbol: str, energy_ev: float | None) -> bool:
    return energy_ev is not None and scene.away_ev(symbol, energy_ev) == 0.0


def _told(judged: Sequence[tuple[Part, Judgement]]) -> list[Reason]:
    """Put the reasons together, with the element before them where there are several."""
    if len(judged) == 1:
        return list(judged[0][1].reasons)
    return [
        replace(item, text=f"{part.symbol}: {item.text}") for part, judgement in judged for item in judgement.reasons
    ]


def _notes(way: Sequence[Part], reading: LabelReading) -> list[Reason]:
    """Say how a label was read where that is not plain."""
    notes = [
        reason("name-corrected", "untested", f"'{part.corrected_from}' was read as {name_of(part.symbol)}")
        for part in way
        if part.corrected_from
    ]
    if not reading.clear:
        others = " or ".join(said_in_names(other) for other in reading.ways if other != tuple(way))
        text = f"read as {said_in_names(tuple(way))}, which fits better here than {others}"
        notes.append(reason("label-unclear", "untested", text))
    return notes


def _way(scene: Scene, reading: LabelReading, energy_ev: float | None, capitals: bool) -> tuple[Part, ...] | None:
    """Choose how to read a label: the only way, or the only one with a line near, or capitals as everywhere."""
    if reading.clear:
        return reading.ways[0]
    if not reading.ways:
        return None
    if capitals and len(reading.ways) == 2 and len(reading.ways[0]) == 1 and len(reading.ways[0][0].symbol) == 2:
        return reading.ways[0]
    if energy_ev is None:
        return None
    shared = set.intersection(*({part.symbol for part in way} for way in reading.ways))
    near = [
        way
        for way in reading.ways
        if any(_is_near(scene, part.symbol, energy_ev) for part in way if part.symbol not in shared)
    ]
    if not near and shared:  # "C K" at carbon's own energy
        near = [way for way in reading.ways if {part.symbol for part in way} == shared]
    return near[0] if len(near) == 1 else None


def _unreadable(scene: Scene, label: Label, reading: LabelReading, energy_ev: float | None) -> LabelOpinion:
    if reading.ways:
        choices = tuple(dict.fromkeys(part.symbol for way in reading.ways for part in way))
        told = " or ".join(said_in_names(way) for way in reading.ways)
        why = reason("label-unclear", "untested", f"'{label.text}' may mean {told}; write it out")
    elif reading.choices:
        choices = reading.choices
        why = reason("label-unclear", "untested", reading.problem)
    else:
        choices = ()
        problem = reading.problem if label.text.strip() else "there is no label"
        why = reason("no-such-label", "untested", problem)
    minimum = scene.minimum_at(energy_ev) if energy_ev is not None else None
    return LabelOpinion(
        energy_ev=label.energy_ev,
        label=label.text,
        read_as=None,
        elements=(),
        verdict="unreadable",
        better=scene.better(energy_ev, minimum, ()) if energy_ev is not None else (),
        choices=choices,
        probability=None,
        minimum_ev=minimum.energy_ev if minimum is not None else None,
        reasons=(why,),
        line=label.line,
    )


def _missed(answer: Identification, named: set[str]) -> list[Missed]:
    """Elements of the answer that no label names, likeliest first, each with its strongest line met."""
    out = []
    for assignment in answer.assignments:
        if assignment.element in named or assignment.probability < POSSIBLE:
            continue
        met = next((line.found_ev for line in assignment.lines if line.found_ev is not None), None)
        out.append(Missed(element=assignment.element, energy_ev=met, probability=assignment.probability))
    return out
