"""A season's close, member by member: what goes on, what falls to the pool, what is owed."""

from dataclasses import dataclass

from governance import quantities
from governance.bylaws import clauses


@dataclass(frozen=True, slots=True, kw_only=True)
class Settlement:
    """How one member's season of one resource ends, in base units.

    ``carried`` adds to the next allotment, ``unclaimed`` goes to the pool, ``owed`` comes off the
    next allotment. ``working`` is the arithmetic in sentences, in base units.
    """

    carried: int
    unclaimed: int
    owed: int
    working: tuple[str, ...]


def settle(
    *,
    carry_over: clauses.CarryOver | None,
    payback: clauses.Payback | None,
    allotted: int,
    taken: int,
) -> Settlement:
    """Settle what a member was allotted against what the member took.

    What goes on is rounded down, so that the rest goes to the pool; what is owed is rounded half
    up, once. Without a carry-over clause nothing goes on; without a payback clause no overuse is
    owed. An allotment below 0 is a debt that was larger than the allotment it came off: it stays
    owed as it is, for the payback factor was applied when it arose.

    :param allotted: with the carry-over and the payback of the season before in it.
    :param taken: 0 or more.
    """
    assert taken >= 0, "takes only add up"
    left = allotted - taken
    if left >= 0:
        return _with_left(carry_over=carry_over, allotted=allotted, taken=taken, left=left)
    return _with_overuse(payback=payback, allotted=allotted, taken=taken)


def _with_left(
    *, carry_over: clauses.CarryOver | None, allotted: int, taken: int, left: int
) -> Settlement:
    working = [f"left: {allotted:,} - {taken:,} = {left:,}"]
    carried = 0
    if carry_over is None:
        working.append("no clause carries anything over")
    else:
        cap = quantities.rounded(allotted * carry_over.at_most, quantities.Rounding.DOWN)
        carried = min(left, cap)
        part = quantities.decimal_text(carry_over.at_most * 100)
        working.append(
            f"clause {carry_over.head.id}: at most {part} % of {allotted:,}, rounded down,"
            f" is {cap:,}; carried over {carried:,}"
        )
    working.append(f"to the pool: {left:,} - {carried:,} = {left - carried:,}")
    return Settlement(carried=carried, unclaimed=left - carried, owed=0, working=tuple(working))


def _with_overuse(*, payback: clauses.Payback | None, allotted: int, taken: int) -> Settlement:
    debt = max(0, -allotted)
    overuse = taken - max(0, allotted)
    working = [f"overuse: {taken:,} - {max(0, allotted):,} = {overuse:,}"]
    owed = debt
    if payback is None:
        working.append("no clause has overuse given back")
    else:
        given_back = quantities.rounded(overuse * payback.factor, quantities.Rounding.HALF_UP)
        owed += given_back
        factor = quantities.decimal_text(payback.factor)
        working.append(
            f"clause {payback.head.id}: {overuse:,} × {factor}, rounded half up, is {given_back:,}"
        )
    if debt:
        working.append(f"still owed from before: {debt:,}; owed in all: {owed:,}")
    return Settlement(carried=0, unclaimed=0, owed=owed, working=tuple(working))
