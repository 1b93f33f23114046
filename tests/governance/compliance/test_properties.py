"""What holds for any season: drawn books and facts, and a slow judgement to compare with."""

from collections import defaultdict
from collections.abc import Mapping
from dataclasses import replace
from datetime import date, timedelta
from fractions import Fraction
from typing import Any

from hypothesis import given, settings
from hypothesis import strategies as st

from governance import facts
from governance.bylaws import clauses, editions
from governance.compliance import findings, judge, reach
from governance.periods import OPEN_END, DateRange, Per, date_of
from tests.governance.compliance import scenes
from tests.governance.compliance.scenes import Gift, Take

WINDOW = scenes.days(date(2026, 3, 4), date(2026, 5, 20))
HOUSEHOLDS = {1: 1, 2: 2, 3: 1, 4: 4, 7: 2}
GRAM = Fraction(1, 1000)

DAYS = st.dates(min_value=date(2026, 3, 2), max_value=date(2026, 5, 22))
KILOS = st.sampled_from([0, GRAM, 13, 20, 21, 21 + GRAM, 40, 42, 42 + GRAM, 43])
DELAYS = st.sampled_from([0, 47 * 60, 48 * 60, 48 * 60 + Fraction(1, 60), 72 * 60])


@st.composite
def ranges(draw: st.DrawFn) -> DateRange:
    first = draw(DAYS)
    return DateRange(first=first, until=first + timedelta(days=draw(st.integers(1, 60))))


@st.composite
def rosters(draw: st.DrawFn) -> facts.Roster:
    return facts.Roster(
        members=tuple(
            scenes.member(
                number,
                household=household,
                classes=draw(
                    st.dictionaries(st.sampled_from(["licensed", "retired"]), ranges(), max_size=2)
                )
                | draw(st.sampled_from([{}, {"licensed": scenes.ALWAYS}])),
                suspended=draw(st.dictionaries(st.sampled_from(["4.1"]), ranges(), max_size=1)),
            )
            for number, household in HOUSEHOLDS.items()
        )
    )


def takes() -> st.SearchStrategy[list[Take]]:
    return st.lists(
        st.builds(
            Take,
            entry=st.integers(1, 40),
            member=st.sampled_from(list(HOUSEHOLDS)),
            # Few days, so that they fall together, and any day, so that edges are met.
            day=st.sampled_from([date(2026, 4, 14), date(2026, 4, 15), date(2026, 4, 16)]) | DAYS,
            kg=KILOS,
            zone=st.sampled_from(scenes.ZONES),
            resource=st.sampled_from(["clams", "mullet"]),
            delay_min=DELAYS,
        ),
        max_size=25,
    )


def gifts() -> st.SearchStrategy[list[Gift]]:
    return st.lists(
        st.builds(
            Gift,
            entry=st.integers(50, 60),
            member=st.sampled_from(list(HOUSEHOLDS)),
            amount=st.sampled_from([1, 359, 360, 6_000]),
            day=DAYS,
            duty=st.sampled_from(["6.1", "6.2"]),
        ),
        max_size=6,
    )


def orders() -> st.SearchStrategy[list[facts.Order]]:
    return st.lists(
        st.builds(
            facts.Order,
            entry=st.integers(70, 80),
            authority=st.just("the authority"),
            resource=st.sampled_from(["clams", "mullet"]),
            zones=st.sampled_from([(), ("mill_reach",), ("pier_sand", "anvil_sand")]),
            during=ranges(),
        ),
        max_size=2,
    )


@st.composite
def seasons(draw: st.DrawFn) -> facts.SeasonFacts:
    known = scenes.season(
        draw(takes()),
        work=draw(gifts()),
        money=draw(gifts()),
        orders=draw(orders()),
        allotments=draw(
            st.dictionaries(
                st.tuples(st.sampled_from(["clams", "mullet"]), st.sampled_from(list(HOUSEHOLDS))),
                st.sampled_from([-30_000, 0, 20_000, 42_000, 90_000]),
            )
        ),
        window=WINDOW,
    )
    return replace(known, roster=draw(rosters()))


WHO = st.sampled_from([None, "licensed", "retired"])


@st.composite
def books(draw: st.DrawFn, *, edition: int, in_force: DateRange) -> clauses.Book:
    return scenes.book(
        *(
            scenes.limit(
                f"3.{place}",
                resource=draw(st.sampled_from(["clams", "mullet"])),
                more_than=draw(st.sampled_from([None, "20 kg", "40 kg"])),
                per=per,
                counted_by=draw(st.sampled_from(clauses.CountedBy)),
                tolerance=draw(st.sampled_from([Fraction(0), Fraction(5, 100), Fraction(1, 3)])),
                who=draw(WHO),
            )
            for place, per in enumerate(Per)
        ),
        scenes.closed(
            first=draw(st.sampled_from([(4, 10), (12, 1)])),
            last=(4, 15),
            zones=draw(st.sampled_from([(), ("mill_reach", "anvil_sand")])),
            who=draw(WHO),
        ),
        scenes.order_clause(who=draw(WHO)),
        scenes.reporting_duty(who=draw(WHO)),
        scenes.work_duty(who=draw(WHO), instead=draw(st.sampled_from([None, "60 EUR/d"]))),
        edition=edition,
        in_force=in_force,
        digest=f"{edition:064x}",
    )


@st.composite
def adopted(draw: st.DrawFn) -> editions.Editions:
    """Return two editions; the change falls on a Wednesday within the season."""
    change = date(2026, 4, 15)
    first = DateRange(first=date(2020, 1, 1), until=change)
    second = DateRange(first=change, until=OPEN_END)
    return editions.Editions(
        books=(
            draw(books(edition=4, in_force=first)),
            draw(books(edition=5, in_force=second)),
        )
    )


AS_OF = st.sampled_from([date(2026, 3, 1), date(2026, 4, 15), WINDOW.last, WINDOW.until])
modest = settings(max_examples=40, deadline=None)


@modest
@given(editions=adopted(), known=seasons(), as_of=AS_OF, order=st.permutations(range(25)))
def test_the_order_of_rows_is_no_input(editions, known, as_of, order):
    plain = judge.judge(editions=editions, facts=known, as_of=as_of)
    mixed = judge.judge(editions=editions, facts=scenes.shuffled(known, order), as_of=as_of)
    assert mixed == plain


@modest
@given(
    editions=adopted(),
    known=seasons(),
    as_of=AS_OF,
    asked=st.sets(st.sampled_from(list(HOUSEHOLDS))),
)
def test_restricting_is_filtering(editions, known, as_of, asked):
    whole = judge.judge(editions=editions, facts=known, as_of=as_of)
    members = reach.touched(roster=known.roster, members=frozenset(asked))
    expected = tuple(one for one in whole if one.key.subject in members)
    answer = judge.judge(editions=editions, facts=known, as_of=as_of, members=members)
    assert answer == expected


@modest
@given(
    editions=adopted(),
    known=seasons(),
    as_of=AS_OF,
    numbers=st.lists(
        st.integers(1, 500), min_size=len(HOUSEHOLDS), max_size=len(HOUSEHOLDS), unique=True
    ),
)
def test_other_numbers_for_the_members_change_only_the_numbers(editions, known, as_of, numbers):
    new = dict(zip(HOUSEHOLDS, numbers, strict=True))
    plain = judge.judge(editions=editions, facts=known, as_of=as_of)
    renamed = judge.judge(editions=editions, facts=_renamed(known, new), as_of=as_of)
    expected = {_bare(one, key=replace(one.key, subject=new[one.key.subject])) for one in plain}
    assert {_bare(one, key=one.key) for one in renamed} == expected
    assert len(renamed) == len(plain)


def _bare(one: findings.Finding, *, key: findings.Key) -> findings.Finding:
    # The digest seals the members' numbers, so it changes with them.
    return replace(one, key=key, inputs="")


def _renamed(known: facts.SeasonFacts, new: Mapping[int, int]) -> facts.SeasonFacts:
    def members_of(table: Any) -> facts.Column:
        return facts.column([new[number] for number in table.member.tolist()])

    return replace(
        known,
        roster=facts.Roster(
            members=tuple(
                sorted(
                    (
                        replace(each, number=new[each.number], household=new[each.household])
                        for each in known.roster.members
                    ),
                    key=lambda each: each.number,
                )
            )
        ),
        withdrawals=tuple(replace(each, member=members_of(each)) for each in known.withdrawals),
        work=replace(known.work, member=members_of(known.work)),
        money=replace(known.money, member=members_of(known.money)),
        allotments={(what, new[who]): much for (what, who), much in known.allotments.items()},
    )


@settings(max_examples=150, deadline=None)
@given(editions=adopted(), known=seasons(), as_of=AS_OF)
def test_a_slow_judgement_row_by_row_finds_the_same(editions, known, as_of):
    found = judge.judge(editions=editions, facts=known, as_of=as_of)
    answer = {
        one.key: (one.edition, one.total, one.limit, one.breach, one.overuse, one.entries)
        for one in found
    }
    assert len(answer) == len(found)
    assert [one.key for one in found] == sorted(answer)
    assert answer == Slow(editions=editions, known=known, as_of=as_of).judged()


class Slow:
    """The rules once more, by dictionaries over single rows; it shares no step with the judge."""

    def __init__(self, *, editions: Any, known: facts.SeasonFacts, as_of: date) -> None:
        self.books = editions.books
        self.known = known
        self.as_of = as_of
        self.members = {each.number: each for each in known.roster.members}
        self.answer: dict[findings.Key, tuple[Any, ...]] = {}

    def judged(self) -> dict[findings.Key, tuple[Any, ...]]:
        rows = list(self._rows())
        for book in self.books:
            for clause in book.clauses:
                if isinstance(clause, clauses.QuantityLimit):
                    self._limit(book, clause, rows)
                elif isinstance(clause, clauses.ClosedWindow):
                    self._whole(book, clause, [row for row in rows if _shut(clause, row)])
                elif isinstance(clause, clauses.OutsideOrder):
                    self._whole(book, clause, [row for row in rows if self._ordered(row)])
                elif isinstance(clause, clauses.ReportingDuty):
                    self._late(book, clause, rows)
                elif isinstance(clause, clauses.WorkDuty):
                    self._work(book, clause)
            # Last, because a finding on a suspension takes the place of one on the same key.
            self._suspended(book, rows)
        return self.answer

    def _rows(self) -> Any:
        for table in self.known.withdrawals:
            for place in range(len(table)):
                row = {
                    name: int(getattr(table, name)[place])
                    for name in ("entry", "member", "instant", "reported", "amount")
                }
                row["day"] = date_of(int(table.day[place]))
                row["zone"] = table.zones[int(table.zone[place])]
                row["resource"] = table.resource
                if self.known.season.holds(row["day"]) and row["day"] <= self.as_of:
                    yield row

    def _binds(self, clause: Any, row: dict[str, Any]) -> bool:
        who = clause.head.who
        return who is None or self.members[row["member"]].is_in(who, row["day"])

    def _put(self, book: Any, key: tuple[Any, ...], numbers: tuple[int, ...], rows: Any) -> None:
        clause, kind, subject, resource, first, until = key
        named = findings.Key(
            clause=clause,
            subject_kind=findings.SubjectKind(kind),
            subject=subject,
            resource=resource,
            window=DateRange(first=first, until=until),
        )
        entries = tuple(sorted({row["entry"] for row in rows}))
        self.answer[named] = (book.edition, *numbers, entries)

    def _limit(self, book: Any, clause: Any, rows: Any) -> None:
        groups = defaultdict(list)
        for row in rows:
            if row["resource"] == clause.resource and self._binds(clause, row):
                first, until = _window(clause.per, row["day"])
                if book.in_force.holds(first):
                    holder = row["member"]
                    if clause.counted_by == "household":
                        holder = HOUSEHOLDS[holder]
                    groups[holder, first, until].append(row)
        for (holder, first, until), group in groups.items():
            total = sum(row["amount"] for row in group)
            if clause.more_than is not None:
                limit = int(clause.more_than.number * 1000)
            else:
                whose = [holder]
                if clause.counted_by == "household":
                    whose = [number for number, home in HOUSEHOLDS.items() if home == holder]
                known = self.known.allotments
                limit = sum(max(0, known.get((clause.resource, number), 0)) for number in whose)
            ceiling = int(limit * (1 + clause.tolerance))
            if total > ceiling:
                key = (clause.head.id, clause.counted_by, holder, clause.resource, first, until)
                self._put(book, key, (total, limit, total - ceiling, total - limit), group)

    def _whole(self, book: Any, clause: Any, rows: Any) -> None:
        bound = [row for row in rows if row["resource"] == clause.resource]
        self._days(book, clause.head.id, [row for row in bound if self._binds(clause, row)])

    def _days(self, book: Any, clause_id: str, rows: Any) -> None:
        groups = defaultdict(list)
        for row in rows:
            if book.in_force.holds(row["day"]) and row["amount"]:
                groups[row["member"], row["resource"], row["day"]].append(row)
        for (member, resource, day), group in groups.items():
            total = sum(row["amount"] for row in group)
            key = (clause_id, "member", member, resource, day, day + timedelta(days=1))
            self._put(book, key, (total, 0, total, total), group)

    def _ordered(self, row: dict[str, Any]) -> bool:
        return any(
            order.resource == row["resource"]
            and order.during.holds(row["day"])
            and (order.zones == () or row["zone"] in order.zones)
            for order in self.known.orders
        )

    def _late(self, book: Any, clause: Any, rows: Any) -> None:
        groups = defaultdict(list)
        for row in rows:
            hours = Fraction(row["reported"] - row["instant"], 3_600_000_000)
            if hours > clause.within_hours and self._binds(clause, row):
                if book.in_force.holds(row["day"]):
                    groups[row["member"], row["day"]].append((hours, row))
        for (member, day), group in groups.items():
            worst = max(hours for hours, _ in group) * 60
            total = int(worst) + (worst.denominator != 1)
            limit = clause.within_hours * 60
            key = (clause.head.id, "member", member, "", day, day + timedelta(days=1))
            late = [row for _, row in group]
            self._put(book, key, (total, limit, total - limit, total - limit), late)

    def _work(self, book: Any, clause: Any) -> None:
        season = self.known.season
        if self.as_of < season.until or not book.in_force.holds(season.first):
            return
        for number, member in self.members.items():
            if clause.head.who is not None and not member.is_in(clause.head.who, season.first):
                continue
            work, money = (
                [
                    {"entry": int(table.entry[place]), "amount": int(table.amount[place])}
                    for place in range(len(table.entry))
                    if table.member[place] == number
                    and season.holds(date_of(int(table.day[place])))
                    and table.duties[int(table.duty[place])] == clause.head.id
                ]
                for table in (self.known.work, self.known.money)
            )
            total = sum(gift["amount"] for gift in work)
            if clause.instead is not None:
                # 60 EUR for a day of 360 minutes: 6,000 cents.
                total += sum(gift["amount"] for gift in money) * 360 // 6_000
            if total < 720:
                key = (clause.head.id, "member", number, "", season.first, season.until)
                self._put(book, key, (total, 720, 720 - total, 720 - total), [*work, *money])

    def _suspended(self, book: Any, rows: Any) -> None:
        self._days(
            book,
            "4.1",
            [
                row
                for row in rows
                if any(
                    held.during.holds(row["day"]) for held in self.members[row["member"]].suspended
                )
            ],
        )


def _shut(clause: Any, row: dict[str, Any]) -> bool:
    if clause.zones and row["zone"] not in clause.zones:
        return False
    day, first, last = row["day"], clause.closed.first, clause.closed.last
    begins, ends = date(day.year, *first), date(day.year, *last)
    return begins <= day <= ends if begins <= ends else day >= begins or day <= ends


def _window(per: Per, day: date) -> tuple[date, date]:
    if per is Per.DAY:
        first, until = day, day + timedelta(days=1)
    elif per is Per.ISO_WEEK:
        first = date.fromisocalendar(*day.isocalendar()[:2], 1)
        until = first + timedelta(days=7)
    elif per is Per.MONTH:
        first = date(day.year, day.month, 1)
        until = date(day.year, day.month + 1, 1)
    else:
        first, until = WINDOW.first, WINDOW.until
    return max(first, WINDOW.first), min(until, WINDOW.until)
