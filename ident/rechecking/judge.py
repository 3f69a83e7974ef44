"""The verdict on one element at one place: what the label says against what the spectrum shows."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from ..names import name_of
from ..reasons import Reason, Side, explain, explain_asked
from ..reasons.words import joined
from ..spectrum import format_ranges
from .scene import LIKELY, MAIN_SHARE, POSSIBLE, SOME_SHARE, Scene

if TYPE_CHECKING:
    from ..minima import Minimum
    from .answer import Verdict
    from .notation import Part
    from .scene import Claim

FAR_EV = 25.0  # beyond all that axis and chemistry allow: no line anywhere near
ROUGH_EV = 7.0  # off its minimum, and none nearer: the energy of a table or a rough reading, not another place
POOR_LIMIT = 20.0  # atomic per cent: where no less would have been called, an absent minimum excludes little
NO_LINES = ("H", "He")
# beside those of the rules, of questions why not, and of lookups
RECHECK_CODES = (
    "label-fits",
    "element-fits",
    "energy-rough",
    "energy-off",
    "nothing-there",
    "another-explains",
    "loss-of-strong-line",
    "other-transition",
    "undecided-here",
    "minimum-unexplained",
    "no-line-near",
    "label-out-of-range",
    "name-corrected",
    "label-unclear",
    "no-such-label",
)


@dataclass(frozen=True, kw_only=True)
class Judgement:
    """What is said of one element of a label."""

    verdict: Verdict
    reasons: tuple[Reason, ...]
    better: tuple[str, ...] = ()
    probability: float | None = None
    minimum_ev: float | None = None


def reason(code: str, side: Side, text: str) -> Reason:
    """Make a reason of a code of `RECHECK_CODES`."""
    return Reason(code=code, side=side, text=text)


def judge(scene: Scene, part: Part, energy_ev: float | None) -> Judgement:
    """Judge one element, at an energy on the spectrum's axis or anywhere."""
    if part.symbol in NO_LINES:
        text = f"{part.symbol} has too few electrons for an Auger transition"
        return Judgement(verdict="impossible", reasons=(reason("no-auger-line", "untested", text),), probability=0.0)
    return _judge_bare(scene, part) if energy_ev is None else _judge_at(scene, part, energy_ev)


def _judge_bare(scene: Scene, part: Part) -> Judgement:
    symbol, probability = part.symbol, scene.probability(part.symbol)
    behind = _behind(scene, symbol)
    if probability >= LIKELY:
        first = reason("element-fits", "for", f"the spectrum speaks for {name_of(symbol)}, {_p(probability)}")
        return Judgement(verdict="agrees", reasons=(first, *behind), probability=probability)
    if not scene.examined.analysis.minima:
        nothing = reason("nothing-there", "against", "nothing in this spectrum stands above the noise")
        return Judgement(verdict="disagrees", reasons=(nothing,), probability=probability)
    asked = scene.asked.get(symbol)
    better = scene.inseparable_from(symbol)
    if probability >= POSSIBLE or better or _all_hidden(scene, symbol) or _poorly_seen(scene, symbol):
        return Judgement(
            verdict="undecided",
            reasons=(_open(scene, symbol), *(behind or _against(scene, symbol))),
            better=better,
            probability=probability,
        )
    if asked is None or asked.expected_ev is None:
        ranges = format_ranges(scene.examined.analysis.spectrum.ranges_ev)
        text = f"no strong line of {name_of(symbol)} lies in the scan ({ranges}), so that it cannot rest on it"
        return Judgement(
            verdict="impossible", reasons=(reason("label-out-of-range", "against", text),), probability=probability
        )
    minimum = scene.minimum_at(asked.expected_ev)
    others = scene.better(asked.expected_ev, minimum, (symbol,))
    return Judgement(verdict="disagrees", reasons=_against(scene, symbol), better=others, probability=probability)


def _judge_at(scene: Scene, part: Part, energy_ev: float) -> Judgement:
    symbol, probability = part.symbol, scene.probability(part.symbol)
    minimum = scene.minimum_at(energy_ev, symbol)
    if not scene.in_range(energy_ev):
        ranges = format_ranges(scene.examined.analysis.spectrum.ranges_ev)
        text = f"{energy_ev:g} eV was not scanned; the spectrum covers {ranges}"
        return Judgement(
            verdict="impossible", reasons=(reason("label-out-of-range", "against", text),), probability=probability
        )
    away = scene.away_ev(symbol, energy_ev)
    place = _Place(scene=scene, part=part, energy_ev=energy_ev, minimum=minimum, away_ev=away)
    if away is None or away > FAR_EV:
        text = f"no line of {name_of(symbol)} stands anywhere near {energy_ev:g} eV"
        return place.says("impossible", reason("no-line-near", "against", text), *place.who_else())
    mine = next((claim for claim in place.claims if claim.element == symbol), None)
    if probability >= LIKELY:
        return _on_a_likely_element(place, mine)
    if probability >= POSSIBLE:
        return place.says("undecided", _open(scene, symbol), *place.who_else(), *_behind(scene, symbol))
    return _on_an_unlikely_element(place)


@dataclass(frozen=True, kw_only=True)
class _Place:
    """One element of a label at its energy."""

    scene: Scene
    part: Part
    energy_ev: float
    minimum: Minimum | None
    away_ev: float | None  # from where a line of the element may stand; 0 when it may stand here

    @property
    def claims(self) -> tuple[Claim, ...]:
        return self.scene.claims_on(self.minimum) if self.minimum is not None else ()

    @property
    def others(self) -> tuple[Claim, ...]:
        """Claims of other elements, each with a share worth naming."""
        return tuple(c for c in self.claims if c.element != self.part.symbol and c.share >= SOME_SHARE)

    def says(self, verdict: Verdict, *reasons: Reason) -> Judgement:
        """Put a judgement together."""
        symbol = self.part.symbol
        better = () if verdict == "agrees" else self.scene.better(self.energy_ev, self.minimum, (symbol,))
        if not better and verdict != "agrees":
            better = self.scene.inseparable_from(symbol)
        return Judgement(
            verdict=verdict,
            reasons=reasons,
            better=better,
            probability=self.scene.probability(symbol),
            minimum_ev=self.minimum.energy_ev if self.minimum is not None else None,
        )

    def who_else(self) -> tuple[Reason, ...]:
        """Say what stands at the label instead: another element, a loss, or nothing."""
        if self.minimum is None:
            loss = self.scene.loss_of(self.energy_ev, 0.0)
            return (_nothing(self.energy_ev), _loss(self.energy_ev, loss)) if loss else (_nothing(self.energy_ev),)
        others = [claim for claim in self.others if claim.probability >= LIKELY]
        if others:
            told = joined(
                [f"{c.element} {c.line.transition} ({c.share:.0%} of its depth, {_p(c.probability)})" for c in others]
            )
            text = f"the minimum at {self.minimum.energy_ev:.1f} eV is explained by {told}"
            return (reason("another-explains", "against", text),)
        loss = self.scene.loss_of(self.minimum.energy_ev, self.minimum.depth)
        if loss is not None:
            return (_loss(self.minimum.energy_ev, loss),)
        if self.scene.is_unexplained(self.minimum):
            text = f"the minimum at {self.minimum.energy_ev:.1f} eV stays unexplained"
            return (reason("minimum-unexplained", "untested", text),)
        return ()


def _on_a_likely_element(place: _Place, mine: Claim | None) -> Judgement:
    """The element is there: is it here?"""
    scene, symbol = place.scene, place.part.symbol
    behind = _behind(scene, symbol)
    if mine is None:
        return _elsewhere(place)
    if mine.share < SOME_SHARE or (mine.share < MAIN_SHARE and place.others):
        text = f"only {mine.share:.0%} of the minimum at {mine.line.found_ev:.1f} eV is {name_of(symbol)}'s"
        return place.says("undecided", reason("undecided-here", "untested", text), *place.who_else(), *behind)
    wrong = _other_transition(place)
    if wrong is not None:
        return replace(place.says("disagrees", wrong, *behind), better=())
    found = mine.line.found_ev or place.energy_ev
    text = (
        f"{symbol} {mine.line.transition} explains {mine.share:.0%} of the minimum at {found:.1f} eV, "
        f"{abs(found - place.energy_ev):.1f} eV from the label; {_p(scene.probability(symbol))}"
    )
    return place.says("agrees", reason("label-fits", "for", text), *behind)


def _elsewhere(place: _Place) -> Judgement:
    """The element is there, but not at the label."""
    scene, symbol = place.scene, place.part.symbol
    met = [line.found_ev for line in scene.weighed[symbol].lines if line.found_ev is not None]
    nearest = min(met, key=lambda found: abs(found - place.energy_ev), default=None)
    behind = _behind(scene, symbol)
    if nearest is not None and place.minimum is None and abs(nearest - place.energy_ev) <= ROUGH_EV:
        text = f"{name_of(symbol)} stands at {nearest:.1f} eV, {abs(nearest - place.energy_ev):.1f} eV from the label"
        return place.says("agrees", reason("energy-rough", "untested", text), *behind)
    if place.minimum is not None and not place.away_ev and not _loss_only(place):
        # a line may stand here, under others or too weak to be told
        likely_others = [c for c in place.others if c.probability >= LIKELY]
        text = f"a line of {name_of(symbol)} may stand here, but the minimum does not need it"
        code = reason("undecided-here", "untested", text)
        verdict: Verdict = "disagrees" if likely_others and _far_from_own(place) else "undecided"
        return place.says(verdict, code, *place.who_else(), *behind)
    where = f"; its nearest here is at {nearest:.1f} eV" if nearest is not None else ""
    off = f", {abs(nearest - place.energy_ev):.1f} eV from the label" if nearest is not None else ""
    text = f"{name_of(symbol)} is there, but no line of it at {place.energy_ev:g} eV{where}{off}"
    return place.says("disagrees", reason("energy-off", "against", text), *place.who_else(), *behind)


def _far_from_own(place: _Place) -> bool:
    """Whether the label stands further from every expected line of the element than its error allows."""
    lines = place.scene.weighed[place.part.symbol].lines
    away = [abs(line.expected_ev - place.energy_ev) - 3.0 * line.sigma_ev for line in lines]
    return min(away, default=0.0) > 0.0


def _loss_only(place: _Place) -> bool:
    minimum = place.minimum
    if minimum is None or place.others:
        return False
    return place.scene.loss_of(minimum.energy_ev, minimum.depth) is not None


def _on_an_unlikely_element(place: _Place) -> Judgement:
    """The element is not supported: does something else explain the minimum?"""
    scene, symbol = place.scene, place.part.symbol
    behind = _against(scene, symbol)
    if place.minimum is None:
        if _too_faint(place):
            return place.says("undecided", _open(scene, symbol), *place.who_else(), *behind)
        return place.says("disagrees", *place.who_else(), *behind)
    rivals = scene.inseparable_from(symbol)
    sure = [claim for claim in place.others if claim.probability >= LIKELY and claim.share >= MAIN_SHARE]
    if rivals:
        text = f"the scan cannot tell {symbol} from {joined(rivals)} here"
        return place.says("undecided", reason("undecided-here", "untested", text), *place.who_else(), *behind)
    if not sure and not _loss_only(place) and not place.away_ev:
        return place.says("undecided", *(place.who_else() or (_open(scene, symbol),)), *behind)
    return place.says("disagrees", *place.who_else(), *behind)


def _too_faint(place: _Place) -> bool:
    """Whether the element could be here without a minimum to show for it."""
    loss = place.scene.loss_of(place.energy_ev, 0.0)
    return not place.away_ev and loss is None and _poorly_seen(place.scene, place.part.symbol)


def _poorly_seen(scene: Scene, symbol: str) -> bool:
    """Whether a good deal of the element would not have been called in this scan, and no line of it is missing."""
    asked = scene.asked.get(symbol)
    if asked is None or asked.ruled_out or asked.expected_ev is None:
        return False
    if asked.weighed is not None and any(line.status == "missing" for line in asked.weighed.lines):
        return False
    return asked.limit is None or asked.limit.atomic_percent >= POOR_LIMIT


def _other_transition(place: _Place) -> Reason | None:
    """A transition from another shell than the lines of the element have at this minimum."""
    part, minimum = place.part, place.minimum
    if part.transition is None or minimum is None:
        return None
    here = [
        line
        for line in place.scene.weighed[part.symbol].lines
        if line.found_ev is not None and abs(line.found_ev - minimum.energy_ev) < 0.5
    ]
    near = {line.transition for line in place.scene.weighed[part.symbol].lines if _near(line.expected_ev, place)}
    if any(name[0] == part.transition.vacancy[0] for name in {line.transition for line in here} | near):
        return None
    text = (
        f"the element fits, the transition does not: at {minimum.energy_ev:.1f} eV stands {here[0].transition}, "
        f"and no line from a vacancy in {part.transition.vacancy[0]}"
    )
    return reason("other-transition", "against", text)


def _near(expected_ev: float, place: _Place) -> bool:
    return abs(expected_ev - place.energy_ev) < FAR_EV


def _all_hidden(scene: Scene, symbol: str) -> bool:
    """Whether every strong line in the scan would be hidden, so that nothing speaks against the element."""
    weighed = scene.weighed.get(symbol)
    if weighed is None:
        return False
    strong = [line for line in weighed.lines if line.relative_height >= 0.3 and line.status != "out of range"]
    return bool(strong) and all(line.status == "hidden" and line.hidden_by for line in strong)


def _behind(scene: Scene, symbol: str) -> tuple[Reason, ...]:
    """Reasons of the identification on an element that it weighed."""
    weighed = scene.weighed.get(symbol)
    return explain(weighed, scene.examined.evidence) if weighed is not None else ()


def _against(scene: Scene, symbol: str) -> tuple[Reason, ...]:
    """Reasons on an element that is not supported."""
    asked = scene.asked.get(symbol)
    return explain_asked(asked, scene.examined.evidence) if asked is not None else _behind(scene, symbol)


def _open(scene: Scene, symbol: str) -> Reason:
    asked, probability = scene.asked.get(symbol), scene.probability(symbol)
    if probability < POSSIBLE and asked is not None and _poorly_seen(scene, symbol):
        amount = "any amount" if asked.limit is None else f"up to {asked.limit.atomic_percent:.2g} at%"
        text = f"nothing speaks for {name_of(symbol)}, but this scan may have missed {amount} of it"
        return reason("undecided-here", "untested", text)
    text = f"the spectrum neither supports nor excludes {name_of(symbol)}, {_p(probability)}"
    return reason("undecided-here", "untested", text)


def _nothing(energy_ev: float) -> Reason:
    return reason("nothing-there", "against", f"no minimum stands at {energy_ev:g} eV")


def _loss(energy_ev: float, claim: Claim) -> Reason:
    found = claim.line.found_ev or energy_ev
    text = (
        f"{found - energy_ev:.0f} eV below the strong {claim.element} {claim.line.transition} at {found:.1f} eV, where "
        "electrons that have lost energy leave their mark"
    )
    return reason("loss-of-strong-line", "against", text)


def _p(probability: float) -> str:
    """Say a probability; never rounded up over a threshold."""
    if probability >= 0.995:
        return "probability above 0.99"
    return "probability below 0.01" if probability < 0.01 else f"probability {int(probability * 100) / 100:.2f}"
