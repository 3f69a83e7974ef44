"""Rules on single lines: met, missing, hidden, out of range, and how deep."""

from __future__ import annotations

import math
from collections.abc import Iterator

from ..names import name_of
from .reason import Rule, Side, Subject, Weighed
from .words import joined, line_named, meeting, times

MOST_NAMED = 3
WORTH_NAMING = 0.2  # relative height from which a line outside the scan is worth a word
DEPTH_OFF_SD = 2.0
TOLD_FROM = 4.5  # noise widths from which a line would have been seen on its own


class PatternMet(Rule):
    """Several lines of the element stand where they should, at one axis and one chemical shift."""

    side: Side = "for"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        met = subject.met
        if len(met) < 2:
            return
        told = "; ".join(meeting(line) for line in met[:MOST_NAMED])
        more = f"; and {len(met) - MOST_NAMED} more" if len(met) > MOST_NAMED else ""
        yield sum(line.log_odds for line in met), f"{len(met)} lines: {told}{more}"


class LineMet(Rule):
    """One line of the element stands where it should."""

    side: Side = "for"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        if len(subject.met) == 1:
            line = subject.met[0]
            depth = f", {times(line.found_significance)} times the noise" if line.found_significance else ""
            yield line.log_odds, meeting(line) + depth


class DepthFits(Rule):
    """The minima are as deep as the element's other lines say they should be."""

    side: Side = "for"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        if len(subject.met) < 2:
            return
        fit = [line for line in subject.met if _depth_sd(line.depth_ratio, line.depth_ratio_factor) < 1.0]
        if len(fit) < 2:
            return
        ratios = joined([f"{times(line.depth_ratio or 0.0)} ({line.transition})" for line in fit[:MOST_NAMED]])
        factor = max(line.depth_ratio_factor or 1.0 for line in fit[:MOST_NAMED])
        yield (
            0.5 * len(fit),
            f"depths are {ratios} times what they should be, which is known within a factor {times(factor)}",
        )


class DepthOff(Rule):
    """A minimum is much deeper or shallower than the element's other lines say."""

    side: Side = "against"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        for line in subject.met:
            off = _depth_sd(line.depth_ratio, line.depth_ratio_factor)
            if off >= DEPTH_OFF_SD and line.depth_ratio is not None and line.found_ev is not None:
                factor = times(line.depth_ratio_factor or 1.0)
                yield (
                    min(0.5 * off**2, 4.0),
                    f"the minimum at {line.found_ev:.1f} eV ({line.transition}) is {times(line.depth_ratio)} times "
                    f"as deep as expected, which is known within a factor {factor}",
                )


class LineMissing(Rule):
    """A line that would stand well above the noise is not there."""

    side: Side = "against"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        missing = [line for line in subject.element.lines if line.status == "missing"]
        if not missing:
            return
        missing.sort(key=lambda line: line.log_odds)
        first, strength = missing[0], times(missing[0].expected_significance or 0.0)
        where = f"where {name_of(subject.element.element)} of this strength would be {strength} times the noise"
        others = [f"{line_named(x)}, {times(x.expected_significance or 0.0)} times" for x in missing[1:MOST_NAMED]]
        more = f"; nor at {'; '.join(others)}" if others else ""
        yield sum(line.log_odds for line in missing), f"nothing at {line_named(first)}, {where}{more}"


class LineOutOfRange(Rule):
    """A strong line lies outside the scan."""

    side: Side = "untested"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        out = [
            line
            for line in subject.element.lines
            if line.status == "out of range" and line.relative_height >= WORTH_NAMING
        ]
        if out:
            verb = "is" if len(out) == 1 else "are"
            told = joined([line_named(line) for line in out[:MOST_NAMED]])
            yield 0.2 + max(line.relative_height for line in out), f"{told} {verb} outside the scan"


class LineHidden(Rule):
    """A line would disappear under a line of another element."""

    side: Side = "untested"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        for line in subject.element.lines:
            if line.status == "hidden" and line.hidden_by:
                yield 0.1 + line.relative_height, f"{line_named(line)} would be hidden under {joined(line.hidden_by)}"


class LineTooWeak(Rule):
    """A line would not stand out from the noise and from the shape of strong lines."""

    side: Side = "untested"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        weak = [line for line in subject.element.lines if line.status == "hidden" and not line.hidden_by]
        if not weak:
            return
        line = weak[0]
        significance = line.expected_significance or 0.0
        strength = f"{times(significance)} times the noise"
        if significance < TOLD_FROM:
            said = f"would be only {strength} and could not be told"
        else:
            said = f"would be {strength}, but the shape of a strong neighbour could cover it"
        tail = f"; so with {len(weak) - 1} weaker" if len(weak) > 1 else ""
        yield 0.05 + line.relative_height, f"{line_named(line)} {said}{tail}"


class SharedMinimum(Rule):
    """A minimum that the element claims is shared with another element."""

    side: Side = "untested"

    def says(self, subject: Subject) -> Iterator[Weighed]:
        for line in subject.met:
            if line.shared_with and line.share is not None and line.found_ev is not None and line.share < 0.9:
                yield (
                    1.0 - line.share,
                    f"the minimum at {line.found_ev:.1f} eV is shared with {joined(line.shared_with)}: "
                    f"{100 * line.share:.0f} % of its depth is this element's",
                )


def _depth_sd(ratio: float | None, factor: float | None) -> float:
    """How many standard deviations a depth ratio is off 1; infinite when it is not known."""
    if ratio is None or factor is None or ratio <= 0 or factor <= 1:
        return -math.inf if ratio is None else math.inf if ratio <= 0 else 0.0
    return abs(math.log(ratio)) / math.log(factor)


LINE_RULES: tuple[type[Rule], ...] = (
    PatternMet,
    LineMet,
    DepthFits,
    DepthOff,
    LineMissing,
    LineOutOfRange,
    LineHidden,
    LineTooWeak,
    SharedMinimum,
)
