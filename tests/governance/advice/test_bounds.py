"""How far an allowable may move from one season to the next; figures worked by hand."""

from fractions import Fraction

import pytest

from governance.advice import bounds
from governance.bylaws import clauses
from tests.governance.advice import asked

UP, DOWN = Fraction(20, 100), Fraction(30, 100)


def bounded(
    proposed: int,
    *,
    present: int = 1_000,
    up: Fraction | None = UP,
    down: Fraction | None = DOWN,
    below_exception: bool = False,
) -> bounds.Bounded:
    clause = asked.quota(clauses.BySurvey(rate=Fraction(1, 2)), resource="clams", up=up, down=down)
    return bounds.bounded(
        clause=clause,
        proposed=proposed,
        present=present,
        below_exception=below_exception,
        units=asked.KILOS,
    )


@pytest.mark.parametrize(
    ("proposed", "amount"),
    [(1_200, 1_200), (1_201, 1_200), (5_000, 1_200), (700, 700), (699, 700), (0, 700)],
)
def test_a_fifth_up_and_three_tenths_down(proposed: int, amount: int) -> None:
    kept = bounded(proposed)
    assert kept.amount == amount
    assert bool(kept.words) == (proposed != amount)


def test_bounds_round_towards_the_present() -> None:
    """A fifth above 1,003 is 1,203.6, three tenths below it 702.1."""
    assert bounded(9_999, present=1_003).amount == 1_203
    assert bounded(0, present=1_003).amount == 703


def test_below_the_exception_the_take_may_fall_at_once() -> None:
    assert bounded(0, below_exception=True) == bounds.Bounded(amount=0, words=())
    assert bounded(5_000, below_exception=True).amount == 1_200


def test_without_a_present_allowable_nothing_is_bounded() -> None:
    assert bounded(5_000, present=0) == bounds.Bounded(amount=5_000, words=())


def test_a_bound_that_the_book_does_not_name_is_none() -> None:
    assert bounded(5_000, up=None).amount == 5_000
    assert bounded(0, down=None).amount == 0


def test_the_words_say_which_bound_and_on_what() -> None:
    (rise,) = bounded(99_000_000, present=68_000_000).words
    assert rise == "at most a rise of 20 % on the present 68,000 kg"
    (fall,) = bounded(1, present=68_000_000).words
    assert fall == "at most a fall of 30 % on the present 68,000 kg"
