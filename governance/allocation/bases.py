"""What a member's part of an allowable rests on: shares, or one each."""

from datetime import date
from fractions import Fraction
from typing import assert_never

from governance import facts
from governance.bylaws import clauses


def weights(
    *, clause: clauses.Allocation, roster: facts.Roster, day: date
) -> tuple[tuple[int, Fraction], ...]:
    """Return the number and the weight of each member whom a clause speaks of, on a day.

    A member of the clause's class who holds no share stands there with the weight 0; a clause
    that names no class speaks of everybody on the roster.
    """
    return tuple(
        (member.number, _weight(clause=clause, member=member, day=day))
        for member in roster.members
        if clause.head.who is None or member.is_in(clause.head.who, day)
    )


def _weight(*, clause: clauses.Allocation, member: facts.Member, day: date) -> Fraction:
    match clause.basis:
        case clauses.Basis.SHARES:
            return member.share_of(clause.resource, day)
        case clauses.Basis.EQUAL:
            return Fraction(1)
        case _:
            assert_never(clause.basis)
