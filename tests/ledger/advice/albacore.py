"""A commons whose observations are the published albacore series, and its season of 1990.

South Atlantic albacore, 1967-1989, of Polacheck, Hilborn & Punt 1993 (CJFAS 50:2597-2607): catches
in thousand tonnes, recorded here in tonnes, and kilograms per hundred hooks. The book lets the
stock grow before it is taken from, as that fit does.
"""

from collections.abc import Sequence
from datetime import UTC, date, datetime
from decimal import Decimal
from fractions import Fraction

from django.db import transaction

from governance.periods import OPEN_END, DateRange
from ledger.bylaws import operations as bylaws
from ledger.commons import operations as commons
from ledger.fieldwork import operations as fieldwork
from ledger.foundation.hands import Hand
from ledger.seasons import operations as seasons
from tests.governance.regeneration import albacore

CODE = "albacore-1990"
SEASON = DateRange(first=date(1990, 3, 1), until=date(1990, 12, 1))
OPENED_AT = datetime(1989, 12, 1, 12, tzinfo=UTC)
# Forty-five days before the first of March.
ADVISED_ON = date(1990, 1, 15)
BOARD = (1, 3)
# Shares of 3 : 1 : 2.
ADMISSIONS = tuple(
    commons.Admission(
        number=number,
        name=f"Member {number}",
        household=number,
        membership_class="licensed",
        shares=(("albacore", Fraction(share)),),
        draw_point=f"Boat {number}",
        admitted_on=OPENED_AT.date(),
    )
    for number, share in ((1, 3), (2, 1), (3, 2))
)

BOOK = """\
book: Albacore Fishers
edition: 1
adopted: {by: assembly, on: 1989-11-01, votes: {for: 3, against: 0, abstained: 0}}
in_force: {from: 1989-12-01}
zone: UTC
money: EUR
resources:
  albacore: {unit: t, base: kg}
clauses:
  - id: "1.1"
    title: Who belongs
    kind: membership
    what: {classes: [licensed]}
    text: Whoever holds a licence.
  - id: "2.1"
    title: How it is shared out
    kind: allocation
    who: {class: licensed}
    what: {resource: albacore, by: shares, rounding: largest_remainder, reserve: 2 %}
    text: By shares.
  - id: "8.1"
    title: A fair hearing
    kind: procedure
    what: {answer: 14 d, answer_to_warning: 7 d, appeal: 21 d, appeal_to: assembly}
    text: Nobody is fined unheard.
ladders: {}
quota:
  albacore:
    title: How much the sea can spare
    observe: [survey, catch]
    growth: schaefer
    order: grow_then_take
    rule: {kind: hockey_stick, limit: 0.2 K, trigger: 0.5 K, fraction: 0.8 Fmsy}
    risk: {below: 0.2 K, at_most: 5 %}
    review: {days_before_season: 45}
    confirm: {by: board, approvals: 2}
"""


def readings(
    *, catches: Sequence[float] = albacore.CATCHES, index: Sequence[float] = albacore.INDEX
) -> list[fieldwork.Reading]:
    """Return the series as the secretary records it, one year after the other."""
    found = []
    for year, caught, seen in zip(albacore.YEARS, catches, index, strict=False):
        at = datetime(year, 12, 31, 12, tzinfo=UTC)
        tonnes = Decimal(str(caught)) * 1000
        found += [
            fieldwork.Reading(
                resource="albacore", kind="catch", year=year, value=tonnes, unit="t", observed_at=at
            ),
            fieldwork.Reading(
                resource="albacore",
                kind="index",
                year=year,
                value=Decimal(str(seen)),
                unit="1",
                observed_at=at,
            ),
        ]
    return found


@transaction.atomic
def founded(*, hand: Hand) -> int:
    """Found the commons, with its members, its board and its book; return its id."""
    commons_id = commons.found(
        slug="albacore-fishers",
        name="Albacore Fishers",
        zone="UTC",
        money="EUR",
        resources=[
            commons.NewResource(
                code="albacore", name="Albacore", unit="t", base="kg", zones=(("sea", "The sea"),)
            )
        ],
        is_demo=False,
        hand=hand,
    )
    commons.admit(commons_id=commons_id, admissions=ADMISSIONS, hand=hand)
    for member in BOARD:
        commons.give_role(
            commons_id=commons_id,
            member=member,
            role="board",
            during=DateRange(first=OPENED_AT.date(), until=OPEN_END),
            hand=hand,
        )
    bylaws.adopt(commons_id=commons_id, text=BOOK, name="book.yaml", hand=hand)
    return commons_id


@transaction.atomic
def observe(*, commons_id: int, observed: Sequence[fieldwork.Reading], hand: Hand) -> None:
    """Record readings."""
    fieldwork.record_observations(commons_id=commons_id, readings=observed, hand=hand)


@transaction.atomic
def open_season(*, commons_id: int, hand: Hand) -> None:
    """Open the season of 1990, which promises the advice."""
    seasons.open_season(
        commons_id=commons_id,
        code=CODE,
        resource="albacore",
        during=SEASON,
        closes_on=SEASON.until,
        hand=hand,
    )
