"""Jordan block sizes as texts."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.desk.jordan import parse_jordan, write_jordan
from app.errors import NumberFault


@given(st.lists(st.integers(1, 9), min_size=1, max_size=20))
def test_written_sizes_read_back(sizes):
    assert parse_jordan(write_jordan(sizes)) == tuple(sorted(sizes, reverse=True))


@pytest.mark.parametrize(
    ("text", "sizes"),
    [
        ("1", (1,)),
        ("2+1", (2, 1)),
        (" 1 + 2 ", (2, 1)),
        ("1^3", (1, 1, 1)),
        ("3+1^2+2", (3, 2, 1, 1)),
        ("1^400", (1,) * 400),
        ("02", (2,)),
    ],
)
def test_read(text, sizes):
    assert parse_jordan(text) == sizes


@pytest.mark.parametrize(
    ("text", "position"),
    [
        ("", 0),
        ("  ", 0),
        ("a", 0),
        ("2+", 2),
        ("+2", 0),
        ("2,1", 1),
        ("2 1", 2),
        ("0", 0),
        ("2+0", 2),
        ("1^0", 0),
        ("1^", 1),
        ("2^2^2", 3),
        ("401", 0),
        ("1^401", 0),
        ("200+201", 4),
        ("-1", 0),
        ("1.5", 1),
        ("²", 0),
        ("9999999", 0),
        ("1^999999", 0),
    ],
)
def test_refused_at_the_character(text, position):
    with pytest.raises(NumberFault) as caught:
        parse_jordan(text)
    assert caught.value.position == position
    assert caught.value.expected


def test_runs_are_shortened():
    assert write_jordan((1,) * 99) == "1^99"
    assert write_jordan((1, 1, 1, 2)) == "2+1+1+1"
