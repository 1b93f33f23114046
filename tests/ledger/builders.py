"""A small commons, built through the book's own operations, for the tests of every slice above.

Reed Bank: two resources, four members in two households, one season of 120 days. Its numbers are
chosen so that they can be split by hand. Every builder opens a transaction of its own, so that it
serves tests that commit as well.

========  =========  ========  ======  =====  ================
member    household  class     mullet  clams  office
========  =========  ========  ======  =====  ================
1         1          licensed  3       1      board
2         1          licensed  1       1      monitor
3         3          licensed  3/2     2      board
4         3          retired   none    none   secretary
========  =========  ========  ======  =====  ================

Of 1,100 kg of mullet 22 kg stay in the pool, and the members are allotted 588, 196 and 294 kg; of
400 kg of clams they are allotted 100, 100 and 200 kg.
"""

from collections.abc import Collection, Sequence
from datetime import UTC, date, datetime, timedelta
from decimal import Decimal
from fractions import Fraction
from typing import Any

from django.db import transaction

from governance.periods import OPEN_END, DateRange
from ledger.bylaws import operations as bylaws
from ledger.commons import operations as commons
from ledger.foundation.clocks import Chance, Clock
from ledger.foundation.hands import Hand
from ledger.journal.leaves import Receipt
from ledger.movements import operations as movements
from ledger.seasons import operations as seasons
from tests.ledger.book_text import book_text

ZONE = "Europe/Dublin"
SEASON = DateRange(first=date(2026, 3, 1), until=date(2026, 6, 29))
NEXT_SEASON = DateRange(first=date(2027, 3, 1), until=date(2027, 6, 29))
MULLET_ALLOWABLE, CLAMS_ALLOWABLE = 1_100_000, 400_000
BOARD, MONITOR, SECRETARY = (1, 3), 2, 4
OFFICES = ((1, "board"), (3, "board"), (2, "monitor"), (4, "secretary"))

RESOURCES = (
    commons.NewResource(
        code="mullet",
        name="Bay mullet",
        unit="kg",
        base="g",
        zones=(("inner_flats", "Inner flats"), ("outer_bay", "Outer bay")),
    ),
    commons.NewResource(
        code="clams",
        name="Clams",
        unit="kg",
        base="g",
        zones=(("mill_reach", "Mill Reach"), ("pier_sand", "Pier Sand")),
    ),
)


def hand(*, clock: Clock, chance: Chance, by: int = SECRETARY) -> Hand:
    """Return the hand of a member, the secretary's if none is named."""
    return Hand(by=by, clock=clock, chance=chance)


def admission(
    number: int,
    *,
    household: int | None = None,
    membership_class: str = "licensed",
    mullet: Fraction | int | str | None = None,
    clams: Fraction | int | str | None = None,
    admitted_on: date = SEASON.first,
) -> commons.Admission:
    """Return the admission of a member, with shares in the resources that are given."""
    shares = (("mullet", mullet), ("clams", clams))
    return commons.Admission(
        number=number,
        name=f"Member {number}",
        household=number if household is None else household,
        membership_class=membership_class,
        shares=tuple((code, Fraction(share)) for code, share in shares if share is not None),
        draw_point=f"Boat {number}",
        admitted_on=admitted_on,
    )


ADMISSIONS = (
    admission(1, mullet=3, clams=1),
    admission(2, household=1, mullet=1, clams=1),
    admission(3, mullet="3/2", clams=2),
    admission(4, household=3, membership_class="retired"),
)


@transaction.atomic
def found(
    *,
    hand: Hand,
    slug: str = "reed-bank",
    resources: Sequence[commons.NewResource] = RESOURCES,
    money: str = "EUR",
) -> int:
    """Found a commons and return its id; its journal holds one entry."""
    return commons.found(
        slug=slug,
        name="Reed Bank Commons",
        zone=ZONE,
        money=money,
        resources=resources,
        is_demo=False,
        hand=hand,
    )


@transaction.atomic
def people(*, hand: Hand, slug: str = "reed-bank") -> int:
    """Found a commons with its members in their offices, and return its id."""
    commons_id = found(hand=hand, slug=slug)
    commons.admit(commons_id=commons_id, admissions=ADMISSIONS, hand=hand)
    for member, role in OFFICES:
        during = DateRange(first=SEASON.first, until=OPEN_END)
        commons.give_role(commons_id=commons_id, member=member, role=role, during=during, hand=hand)
    return commons_id


@transaction.atomic
def adopt_book(*, commons_id: int, hand: Hand, **changes: Any) -> Receipt:
    """Adopt an edition, and return its receipt.

    :param changes: what the edition says otherwise, see ``book_text``.
    """
    text = book_text(**changes)
    return bylaws.adopt(commons_id=commons_id, text=text, name="book.yaml", hand=hand)


@transaction.atomic
def governed(*, hand: Hand, slug: str = "reed-bank", **changes: Any) -> int:
    """Found a commons with members and an edition in force, and return its id.

    :param changes: what the edition says otherwise, see ``book_text``.
    """
    commons_id = people(hand=hand, slug=slug)
    adopt_book(commons_id=commons_id, hand=hand, **changes)
    return commons_id


@transaction.atomic
def open_seasons(*, commons_id: int, hand: Hand, during: DateRange = SEASON) -> None:
    """Open a season of each resource, named for its year: ``mullet-2026``, ``clams-2026``.

    They close on the fifteenth day after the last.
    """
    for resource in ("mullet", "clams"):
        seasons.open_season(
            commons_id=commons_id,
            code=f"{resource}-{during.first.year}",
            resource=resource,
            during=during,
            closes_on=during.last + timedelta(days=15),
            hand=hand,
        )


@transaction.atomic
def adopt_allowables(
    *,
    commons_id: int,
    hand: Hand,
    year: int = SEASON.first.year,
    mullet: int = MULLET_ALLOWABLE,
    clams: int = CLAMS_ALLOWABLE,
    approved_by: Collection[int] = BOARD,
) -> tuple[Receipt, Receipt]:
    """Adopt the allowables of a year's two seasons, in grams; return the two receipts."""
    for_mullet, for_clams = (
        seasons.adopt_allowable(
            commons_id=commons_id,
            season=f"{resource}-{year}",
            amount=amount,
            approved_by=approved_by,
            hand=hand,
        )
        for resource, amount in (("mullet", mullet), ("clams", clams))
    )
    return for_mullet, for_clams


@transaction.atomic
def opened(*, hand: Hand, slug: str = "reed-bank", **changes: Any) -> int:
    """Build the whole: a governed commons whose season is open and split; return its id.

    :param changes: what the edition says otherwise, see ``book_text``.
    """
    commons_id = governed(hand=hand, slug=slug, **changes)
    open_seasons(commons_id=commons_id, hand=hand)
    adopt_allowables(commons_id=commons_id, hand=hand)
    return commons_id


def at(day: date, *, hour: int = 12) -> datetime:
    """Return an instant of a day, in UTC."""
    return datetime(day.year, day.month, day.day, hour, tzinfo=UTC)


def line(
    resource: str = "mullet", kilograms: str = "10", *, zone: str | None = None, unit: str = "kg"
) -> movements.Line:
    """Return a line of a slip; its zone is one where nothing is closed, if none is named."""
    zone = zone or {"mullet": "outer_bay"}.get(resource, "pier_sand")
    return movements.Line(resource=resource, zone=zone, given=Decimal(kilograms), unit=unit)


def slip(
    name: str,
    *lines: movements.Line,
    member: int = 1,
    day: date = date(2026, 3, 2),
    hours_later: int = 2,
    note: str = "",
) -> movements.Slip:
    """Return a slip of a noon on a day, handed in some hours later; 10 kg of mullet if no line."""
    return movements.Slip(
        slip=name,
        member=member,
        taken_at=at(day),
        handed_in=at(day) + timedelta(hours=hours_later),
        draw_point=f"Boat {member}",
        lines=lines or (line(),),
        note=note,
    )


@transaction.atomic
def land(*, commons_id: int, hand: Hand, slips: Sequence[movements.Slip]) -> tuple[Receipt, ...]:
    """Record slips and return their receipts."""
    return movements.record_withdrawals(commons_id=commons_id, slips=slips, hand=hand)
