"""Each rule on evidence made by hand. What a rule must say is common practice of identification, no source, unless
one is named; the order of steps follows the standard practice ASTM E827 (from memory).
"""

from __future__ import annotations

from dataclasses import replace

from ident.matching.evidence import (
    ElementEvidence,
    Evidence,
    InseparableEvidence,
    LineEvidence,
    RivalEvidence,
    ScaleEvidence,
    StateEvidence,
)
from ident.reasons import RULES, Reason, explain

SCALE = ScaleEvidence(offset_ev=0.0, offset_sigma_ev=1.0, slope=0.0, slope_sigma=0.001, charging="no")

MET = LineEvidence(
    transition="L3M23V",
    table_ev=417.0,
    expected_ev=418.0,
    sigma_ev=1.3,
    relative_height=1.0,
    status="met",
    found_ev=417.6,
    found_sigma_ev=0.2,
    share=1.0,
    expected_significance=40.0,
    found_significance=35.0,
    depth_ratio=0.88,
    depth_ratio_factor=1.4,
    log_odds=12.0,
)
SECOND = replace(MET, transition="L3M23M23", expected_ev=387.0, found_ev=386.8, relative_height=0.9, log_odds=9.0)
MISSING = LineEvidence(
    transition="L3VV",
    table_ev=702.0,
    expected_ev=703.0,
    sigma_ev=1.2,
    relative_height=1.0,
    status="missing",
    expected_significance=14.0,
    log_odds=-6.0,
)


def told(*lines: LineEvidence, pairs: tuple[InseparableEvidence, ...] = (), **fields: object) -> tuple[Reason, ...]:
    element = ElementEvidence(element="Ti", z=22, probability=0.97, log_odds=9.0, lines=lines)
    element = replace(element, **fields)  # type: ignore[arg-type]
    evidence = Evidence(scale=SCALE, elements=(element,), unexplained=(), inseparable=pairs, untestable=())
    return explain(element, evidence)


def by_code(reasons: tuple[Reason, ...]) -> dict[str, Reason]:
    return {reason.code: reason for reason in reasons}


def test_codes_are_unique_words_with_hyphens_and_claims() -> None:
    codes = [rule.code() for rule in RULES]
    assert len(set(codes)) == len(codes)
    for rule in RULES:
        assert rule.code() == rule.code().lower()
        assert (rule.__doc__ or "").endswith(".")


def test_a_line_that_was_met_says_where_and_how_well() -> None:
    reason = by_code(told(MET))["line-met"]
    assert reason.side == "for"
    assert "418.0 eV (L3M23V) met at 417.6, 0.3 sd" in reason.text  # 0.4 eV over 1.3 eV, by hand


def test_several_lines_are_one_reason_and_not_told_twice() -> None:
    reasons = by_code(told(MET, SECOND))
    assert "pattern-met" in reasons
    assert "line-met" not in reasons
    assert "387.0 eV (L3M23M23) met at 386.8" in reasons["pattern-met"].text


def test_two_lines_that_met_one_minimum_count_once() -> None:
    reasons = by_code(told(MET, replace(MET, transition="L2M23V", relative_height=0.4)))
    assert "line-met" in reasons
    assert "pattern-met" not in reasons


def test_depths_that_fit_speak_for_and_those_that_do_not_against() -> None:
    assert by_code(told(MET, SECOND))["depth-fits"].side == "for"
    deep = replace(SECOND, depth_ratio=4.0)  # ln 4 / ln 1.4 = 4.1 standard deviations, by hand
    off = by_code(told(MET, deep))["depth-off"]
    assert off.side == "against"
    assert "4 times as deep" in off.text


def test_a_missing_line_says_how_strong_it_would_be() -> None:
    reason = by_code(told(MET, MISSING))["line-missing"]
    assert reason.side == "against"
    assert "nothing at 703 eV (L3VV)" in reason.text
    assert "titanium of this strength would be 14 times the noise" in reason.text


def test_out_of_range_and_hidden_lines_are_untested_and_not_against() -> None:
    out = replace(MISSING, status="out of range", expected_significance=None, log_odds=0.0)
    hidden = replace(MISSING, status="hidden", transition="L3M23M23", expected_ev=598.0, hidden_by=("F",))
    weak = replace(MISSING, status="hidden", transition="M23VV", expected_ev=47.0, expected_significance=2.0)
    reasons = told(MET, out, hidden, weak)
    found = by_code(reasons)
    assert "703 eV (L3VV) is outside the scan" in found["line-out-of-range"].text
    assert "hidden under F" in found["line-hidden"].text
    assert "2 times the noise" in found["line-too-weak"].text
    assert {found[code].side for code in ("line-out-of-range", "line-hidden", "line-too-weak")} == {"untested"}
    assert not [reason for reason in reasons if reason.code == "line-missing"]


def test_a_shared_minimum_says_with_whom() -> None:
    shared = replace(MET, share=0.35, shared_with=("N",))
    assert "shared with N: 35 %" in by_code(told(shared))["shared-minimum"].text


def test_one_low_line_is_a_weak_foundation() -> None:
    low = replace(MET, transition="M23VV", expected_ev=47.0, found_ev=47.2)
    found = by_code(told(low, single_low_line=True))
    assert found["one-low-line"].side == "against"
    assert "rests-on-one-line" not in found


def test_shifts() -> None:
    state = StateEvidence(name="oxide", shift_ev=-7.6, next_name="carbide", log_odds=2.0)
    assert "oxide" in by_code(told(MET, state=state, shift_ev=-8.0))["shift-fits-state"].text
    alike = by_code(told(MET, state=replace(state, log_odds=0.2, over_reference=5.0), shift_ev=-8.0))
    assert "shift-fits-state" not in alike
    assert "fits oxide and carbide" in alike["states-alike"].text
    metal = replace(state, name="element", shift_ev=0.0, reference=True, over_reference=0.0)
    assert "'element'" in by_code(told(MET, state=metal))["shift-fits-state"].text
    two = replace(state, second_name="element", second_shift_ev=0.0)
    assert "two states at once" in by_code(told(MET, state=two))["shift-fits-state"].text
    assert by_code(told(MET, shift_ev=-9.0))["shift-large"].side == "against"
    assert "shift-large" not in by_code(told(MET, shift_ev=-1.0))


def test_rivals_count_for_or_against_by_their_probability() -> None:
    rival = RivalEvidence(
        element="N", transition="KL23L23", at_ev=381.0, deviation_sd=1.0, missing=(("KL1L23", 360.0, 5.0),)
    )
    assert "360 eV (KL1L23) would be 5 times the noise" in by_code(told(MET, rivals=(rival,)))["rival-less-likely"].text
    likely = replace(rival, probability=0.6)
    assert by_code(told(MET, probability=0.3, rivals=(likely,)))["rival-likelier"].side == "against"


def test_without_rivals_it_is_the_only_candidate() -> None:
    assert "only-candidate" in by_code(told(MET))
    assert "only-candidate" not in by_code(told(MET, probability=0.2))


def test_an_inseparable_pair_is_told_of_both() -> None:
    pair = InseparableEvidence(elements=("Ti", "N"), at_ev=385.0)
    assert "cannot tell it from N" in by_code(told(MET, pairs=(pair,)))["cannot-be-separated"].text


def test_commonness_speaks_either_way() -> None:
    assert by_code(told(MET, common=True))["common-on-surfaces"].side == "for"
    assert by_code(told(MET, prior_log_odds=-6.0))["rare-on-surfaces"].side == "against"


def test_the_weightiest_comes_first() -> None:
    assert told(MET, SECOND, MISSING)[0].code == "pattern-met"
    heavy = replace(MISSING, log_odds=-30.0)
    assert told(MET, SECOND, heavy)[0].code == "line-missing"


def test_no_two_reasons_say_the_same() -> None:
    texts = [reason.text for reason in told(MET, SECOND, MISSING, replace(MISSING, transition="L2VV"))]
    assert len(set(texts)) == len(texts)
