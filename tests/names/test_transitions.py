"""Transitions: levels as IUPAC writes them (Pure Appl. Chem. 63 (1991) 735), and the spectroscopist's shorthand."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from ident.errors import UnknownNameError
from ident.names import TransitionName, parse_transition
from ident.tables import published_lines, read_lines

# Subshells of a shell with principal quantum number n: 2 n - 1 (textbook fact); the outer shells as far as filled.
LEVELS = ["K"]
for shell, count in {"L": 3, "M": 5, "N": 7, "O": 5, "P": 3}.items():
    LEVELS += [f"{shell}{number}" for number in range(1, count + 1)]
FINALS = [*LEVELS[1:], "L23", "M23", "M45", "N23", "N45", "N67", "O23", "O45", "P23", "V"]


@pytest.mark.parametrize(
    ("text", "parts", "shells"),
    [
        ("KL23L23", ("K", "L23", "L23"), "KLL"),
        ("KL2L3", ("K", "L2", "L3"), "KLL"),
        ("L3M45M45", ("L3", "M45", "M45"), "LMM"),
        ("L3M23V", ("L3", "M23", "V"), "LMV"),
        ("L3-M23-V", ("L3", "M23", "V"), "LMV"),
        ("L3 M4,5 M4,5".replace(",", ""), ("L3", "M45", "M45"), "LMM"),
        ("KVV", ("K", "V", "V"), "KVV"),
        ("LMM", ("L", "M", "M"), "LMM"),
        (" M5N67N67 ", ("M5", "N67", "N67"), "MNN"),
        ("L₃VV", ("L3", "V", "V"), "LVV"),
        ("N67O45O45", ("N67", "O45", "O45"), "NOO"),
    ],
)
def test_transitions_read(text: str, parts: tuple[str, str, str], shells: str) -> None:
    read = parse_transition(text)
    assert (read.vacancy, read.first, read.second) == parts
    assert read.shells == shells
    assert str(read) == "".join(parts)


@pytest.mark.parametrize(
    "text", ["", "K", "KL", "KLLL", "Ti1", "L4MM", "K1L23L23", "L3M67V", "L3M23Q", "1LL", "V", "VVV", "2p3d3d"]
)
def test_what_is_no_transition_is_refused_in_one_line(text: str) -> None:
    """There is no L4, M6 or K1: a shell of principal quantum number n has 2 n - 1 subshells."""
    with pytest.raises(UnknownNameError) as caught:
        parse_transition(text)
    assert repr(text)[1:-1] in str(caught.value)
    assert "\n" not in str(caught.value)


@given(st.sampled_from(LEVELS), st.sampled_from(FINALS), st.sampled_from(FINALS))
def test_transitions_read_back(vacancy: str, first: str, second: str) -> None:
    made = TransitionName(vacancy=vacancy, first=first, second=second)
    assert parse_transition(str(made)) == made
    assert parse_transition(f"{vacancy}-{first}-{second}") == made


@given(st.text(max_size=12))
def test_any_text_is_read_or_refused(text: str) -> None:
    try:
        assert parse_transition(text).vacancy[0] in "KLMNOP"
    except UnknownNameError as error:
        assert "\n" not in str(error)


def test_every_line_of_the_tables_is_a_transition() -> None:
    for line in read_lines():
        assert str(parse_transition(line.transition)) == line.transition
    named = {row.transition for row in published_lines()} - {"minor-MNN"}
    for transition in named:
        assert parse_transition(transition).shells[0] in "KLMNO"
