"""The bounds that a book lays on how far an allowable may move from one season to the next."""

from dataclasses import dataclass
from fractions import Fraction

from governance.bylaws import clauses
from governance.quantities import Rounding, amount_text, decimal_text, rounded


@dataclass(frozen=True, slots=True, kw_only=True)
class Bounded:
    """An allowable within the book's bounds, and in words which bound moved it."""

    amount: int
    words: tuple[str, ...]


def bounded(
    *,
    clause: clauses.PoolTotal,
    proposed: int,
    present: int,
    below_exception: bool,
    units: clauses.ResourceUnits,
) -> Bounded:
    """Return the allowable that the book lets follow the present one.

    :param proposed: what the rule alone gives, in base units.
    :param present: the allowable in force, in base units; nought means that none is.
    :param below_exception: whether the stock lies below the level under which the take may fall
        further than the bound.
    """
    if present == 0:
        return Bounded(amount=proposed, words=())
    if clause.up_at_most is not None:
        highest = rounded(present * (1 + clause.up_at_most), Rounding.DOWN)
        if proposed > highest:
            return _at(highest, "rise", clause.up_at_most, present, units)
    if clause.down_at_most is not None and not below_exception:
        lowest = rounded(present * (1 - clause.down_at_most), Rounding.UP)
        if proposed < lowest:
            return _at(lowest, "fall", clause.down_at_most, present, units)
    return Bounded(amount=proposed, words=())


def _at(
    amount: int, way: str, part: Fraction, present: int, units: clauses.ResourceUnits
) -> Bounded:
    before = amount_text(present, base=units.base, unit_code=units.unit)
    percent = decimal_text(part * 100)
    return Bounded(
        amount=amount, words=(f"at most a {way} of {percent} % on the present {before}",)
    )
