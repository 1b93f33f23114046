"""One complete example of every kind of clause: as written, as read, and as said aloud."""

import datetime
from dataclasses import dataclass
from fractions import Fraction

from governance.bylaws import clauses
from governance.periods import OPEN_END, DateRange, Per
from governance.quantities import Amount, Money, Price

IN_FORCE = DateRange(first=datetime.date(2026, 3, 1), until=OPEN_END)

# Every example stands in this book, which has what the examples name.
BOOK = """\
book: Reed Bank
edition: 2
adopted: {by: assembly, on: 2026-02-14, votes: {for: 9, against: 1, abstained: 0}}
in_force: {from: 2026-03-01}
zone: Europe/Dublin
money: EUR
resources:
  clams: {unit: kg, base: g}
clauses:
  - {id: "1", title: Who, kind: membership, what: {classes: [licensed, elder]}, text: All of us.}
CLAUSE
ladders:
  over: {title: Too much, window: 365 d, steps: [{warning: {}}]}
LADDER
QUOTA
"""


@dataclass(frozen=True, slots=True, kw_only=True)
class Example:
    """A clause as written in its section of the book, its record, and its sentence by hand."""

    section: str
    written: str
    record: clauses.Clause
    sentence: str

    @property
    def id(self) -> str:
        """Return the id that the clause is found by."""
        return self.record.head.id

    @property
    def text(self) -> str:
        """Return the whole book with the example in it."""
        text = BOOK.replace(self.section, self.written)
        return (
            text.replace("CLAUSE", "")
            .replace("LADDER", "")
            .replace("QUOTA", "quota: {}" if self.section != "QUOTA" else "")
        )


def _head(
    clause_id: str, *, text: str = "T.", who: str | None = None, or_else: str | None = None
) -> clauses.Head:
    return clauses.Head(
        id=clause_id, title="A title", text=text, in_force=IN_FORCE, who=who, or_else=or_else
    )


def _clause(body: str) -> str:
    lines = ['  - id: "2"', "    title: A title", "    text: T.", *body.strip().splitlines()]
    return "\n".join([*lines[:3], *("    " + line.strip() for line in lines[3:])])


EXAMPLES = (
    Example(
        section="CLAUSE",
        written=_clause(
            """
            kind: membership
            what: {classes: [guest]}
            """
        ),
        record=clauses.Membership(head=_head("2"), classes=("guest",)),
        sentence="A member is guest.",
    ),
    Example(
        section="CLAUSE",
        written=_clause(
            """
            kind: allocation
            who: {class: licensed}
            what: {resource: clams, by: equal, rounding: webster, reserve: 2.5 %}
            """
        ),
        record=clauses.Allocation(
            head=_head("2", who="licensed"),
            resource="clams",
            basis=clauses.Basis.EQUAL,
            rounding=clauses.Apportionment.WEBSTER,
            reserve=Fraction(1, 40),
        ),
        sentence=(
            "The season's allowable of clams is split among licensed members in equal parts, with"
            " 2.5 percent kept in the pool, parts rounded by Webster's divisors and ties going to"
            " the lower member number."
        ),
    ),
    Example(
        section="CLAUSE",
        written=_clause(
            """
            kind: quantity_limit
            who: {class: elder}
            must_not: withdraw
            what: {resource: clams, more_than: 1 kg, per: iso_week, counted_by: member}
            or_else: over
            """
        ),
        record=clauses.QuantityLimit(
            head=_head("2", who="elder", or_else="ladder.over"),
            resource="clams",
            more_than=Amount(number=Fraction(1), unit="kg"),
            per=Per.ISO_WEEK,
            counted_by=clauses.CountedBy.MEMBER,
            tolerance=Fraction(0),
        ),
        sentence=(
            "An elder member must not take more clams in a week than 1 kilogram, and nothing beyond"
            " that is tolerated; otherwise the ladder “Too much” applies."
        ),
    ),
    Example(
        section="CLAUSE",
        written=_clause(
            """
            kind: closed_window
            must_not: withdraw
            what: {resource: clams, zones: [long_spit, mill_reach, pier]}
            when: {from: 20 December, through: 6 January}
            """
        ),
        record=clauses.ClosedWindow(
            head=_head("2"),
            resource="clams",
            zones=("long_spit", "mill_reach", "pier"),
            closed=clauses.YearlyWindow(first=(12, 20), last=(1, 6)),
        ),
        sentence=(
            "A member must not take clams in long spit, mill reach or pier from 20 December to"
            " 6 January of any year, both days included."
        ),
    ),
    Example(
        section="CLAUSE",
        written=_clause(
            """
            kind: outside_order
            must_not: withdraw
            what: {resource: clams}
            or_else: over
            """
        ),
        record=clauses.OutsideOrder(head=_head("2", or_else="ladder.over"), resource="clams"),
        sentence=(
            "A member must not take clams from a zone while an outside authority's order closes it;"
            " otherwise the ladder “Too much” applies."
        ),
    ),
    Example(
        section="CLAUSE",
        written=_clause(
            """
            kind: reporting_duty
            must: report
            what: {within: 2 d}
            """
        ),
        record=clauses.ReportingDuty(head=_head("2"), within_hours=48),
        sentence="A member must hand in the slip within 48 hours of a take.",
    ),
    Example(
        section="CLAUSE",
        written=_clause(
            """
            kind: work_duty
            must: contribute
            what: {work: 1.5 d, day: 6.5 h, per: season, instead: 12.50 EUR/d}
            """
        ),
        record=clauses.WorkDuty(
            head=_head("2"),
            days=Fraction(3, 2),
            day_minutes=390,
            instead=Price(money=Money(number=Fraction(25, 2), currency="EUR"), per="d"),
        ),
        sentence=(
            "A member must give 1.5 days of work in each season, 6 hours and 30 minutes to the day,"
            " or pay 12.50 EUR for each day not worked."
        ),
    ),
    Example(
        section="CLAUSE",
        written=_clause(
            """
            kind: carry_over
            may: carry_over
            what: {resource: clams, at_most: 10 %}
            """
        ),
        record=clauses.CarryOver(head=_head("2"), resource="clams", at_most=Fraction(1, 10)),
        sentence=(
            "A member may carry over what is left of the allotment of clams into the next season,"
            " at most 10 percent of the allotment."
        ),
    ),
    Example(
        section="CLAUSE",
        written=_clause(
            """
            kind: payback
            must: pay_back
            what: {resource: clams, factor: 1.5}
            """
        ),
        record=clauses.Payback(head=_head("2"), resource="clams", factor=Fraction(3, 2)),
        sentence=(
            "What a member takes beyond the allotment of clams comes off the next one 1.5 times"
            " over."
        ),
    ),
    Example(
        section="CLAUSE",
        written=_clause(
            """
            kind: procedure
            what: {answer: 14 d, answer_to_warning: 1 d, appeal: 21 d, appeal_to: general_meeting}
            """
        ),
        record=clauses.Procedure(
            head=_head("2"),
            answer_days=14,
            answer_to_warning_days=1,
            appeal_days=21,
            appeal_to="general_meeting",
        ),
        sentence=(
            "A member has 14 days to answer before anything is decided, or 1 day where no more than"
            " a warning is meant, and 21 days to appeal to the general meeting."
        ),
    ),
    Example(
        section="LADDER",
        written="""\
  steep:
    title: A title
    window: 30 d
    restore: excess
    steps:
      - warning:
      - fine: {per_excess: 3 EUR/kg, at_most: 200 EUR}
      - fine: {flat: 12.50 EUR}
      - suspension: {days: 1}
      - refer: assembly
""",
        record=clauses.SanctionLadder(
            head=_head("ladder.steep", text=""),
            window_days=30,
            restore=True,
            steps=(
                clauses.Warning(),
                clauses.Fine(
                    flat=None,
                    per_excess=Price(money=Money(number=Fraction(3), currency="EUR"), per="kg"),
                    at_most=Money(number=Fraction(200), currency="EUR"),
                ),
                clauses.Fine(
                    flat=Money(number=Fraction(25, 2), currency="EUR"),
                    per_excess=None,
                    at_most=None,
                ),
                clauses.Suspension(days=1),
                clauses.Referral(body="assembly"),
            ),
        ),
        sentence=(
            "An act that breaks a clause is answered with a written warning, then a fine of 3 EUR"
            " for each kilogram of the breach but no more than 200 EUR, then a fine of 12.50 EUR,"
            " then a suspension of 1 day, then referral to the assembly, one step further for each"
            " earlier act within the 30 days before it; what was taken in excess is given back at"
            " every step."
        ),
    ),
    Example(
        section="QUOTA",
        written="""\
quota:
  clams:
    title: A title
    observe: [catch, survey]
    growth: pella_tomlinson
    shape: 0.19
    order: grow_then_take
    rule:
      kind: forty_ten
      lower: 0.1 K
      upper: 0.4 K
      fraction: 1 Fmsy
      reading: straight_line_in_catch
    change_at_most: {up: 20 %, down: 30 %, unless_below: 0.5 Bmsy}
    risk: {below: 0.2 K, at_most: 5 %}
    review: {days_before_season: 45}
    confirm: {by: board, approvals: 1}
""",
        record=clauses.PoolTotal(
            head=_head("quota.clams", text=""),
            resource="clams",
            method=clauses.ByGrowthModel(
                growth=clauses.Growth.PELLA_TOMLINSON,
                shape=Fraction(19, 100),
                sequence=clauses.Sequence.GROW_THEN_TAKE,
                rule=clauses.FortyTen(
                    lower=clauses.Reference(multiple=Fraction(1, 10), of="K"),
                    upper=clauses.Reference(multiple=Fraction(4, 10), of="K"),
                    fraction=clauses.Reference(multiple=Fraction(1), of="Fmsy"),
                    reading=clauses.FortyTenReading.STRAIGHT_LINE_IN_CATCH,
                ),
            ),
            up_at_most=Fraction(1, 5),
            down_at_most=Fraction(3, 10),
            unless_below=clauses.Reference(multiple=Fraction(1, 2), of="Bmsy"),
            risk=clauses.Risk(
                below=clauses.Reference(multiple=Fraction(1, 5), of="K"), at_most=Fraction(1, 20)
            ),
            review_days=45,
            confirm_by="board",
            approvals=1,
        ),
        sentence=(
            "The next season's allowable of clams is advised 45 days before the season from a"
            " Pella–Tomlinson model of the stock of shape 0.19, a season's growth coming before its"
            " take: nothing at or below 10 percent of the unfished stock, 100 percent of the"
            " fraction that yields most from 40 percent of the unfished stock upwards, and between"
            " the two an allowable that rises in a straight line; it rises by at most 20 percent"
            " and falls by at most 30 percent from season to season unless the stock is below 50"
            " percent of the stock that yields most; the chance that the stock lies below 20"
            " percent of the unfished stock in any season is at most 5 percent; the board confirms"
            " it with 1 approval."
        ),
    ),
)
