"""A small roster and an allocation clause for the tests of this folder."""

from datetime import date
from fractions import Fraction

from governance import facts
from governance.bylaws import clauses
from governance.periods import OPEN_END, DateRange


def since(day: date, until: date = OPEN_END) -> DateRange:
    return DateRange(first=day, until=until)


def member(
    number: int,
    *,
    belongs: str = "licensed",
    until: date = OPEN_END,
    mullet: tuple[tuple[Fraction, date], ...] = (),
) -> facts.Member:
    return facts.Member(
        number=number,
        household=number,
        classes=(facts.Dated(value=belongs, during=since(date(2020, 1, 1), until), entry=1),),
        shares={
            "mullet": tuple(
                facts.Dated(value=share, during=since(day), entry=2) for share, day in mullet
            )
        },
        suspended=(),
    )


ROSTER = facts.Roster(
    members=(
        member(1, mullet=((Fraction(2), date(2020, 1, 1)), (Fraction(1, 2), date(2026, 5, 1)))),
        member(2, mullet=((Fraction(3, 2), date(2020, 1, 1)),), until=date(2026, 7, 1)),
        member(41, belongs="retired"),
        member(43),
    )
)


def head(clause_id: str, who: str | None = None) -> clauses.Head:
    return clauses.Head(
        id=clause_id,
        title="A clause",
        text="As the assembly adopted it.",
        in_force=since(date(2026, 3, 1)),
        who=who,
        or_else=None,
    )


def allocation(
    *,
    basis: clauses.Basis = clauses.Basis.SHARES,
    who: str | None = "licensed",
    rounding: clauses.Apportionment = clauses.Apportionment.LARGEST_REMAINDER,
    reserve: Fraction = Fraction(0),
) -> clauses.Allocation:
    return clauses.Allocation(
        head=head("2.1", who), resource="mullet", basis=basis, rounding=rounding, reserve=reserve
    )
