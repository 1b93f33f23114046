"""Texts to books: what is read, and where and how the rest is refused."""

import datetime
import hashlib
from fractions import Fraction
from pathlib import Path

import pytest

from governance.bylaws import clauses, documents
from governance.bylaws.problems import UnreadableBook
from governance.periods import OPEN_END, DateRange, Per
from governance.quantities import Amount, Money, Price
from tests.governance.bylaws.small_book import BOOK, problems_of, read

FIXTURE = Path(__file__).parents[3] / "fixtures" / "tarrin_bay" / "bylaws.yaml"


def test_the_small_book_reads() -> None:
    book = read(BOOK)
    assert (book.name, book.edition, book.zone, book.money) == (
        *("Reed Bank", 2, "Europe/Dublin", "EUR"),
    )
    assert book.in_force == DateRange(first=datetime.date(2026, 3, 1), until=OPEN_END)
    assert book.adopted == clauses.Adoption(
        by="assembly",
        on=datetime.date(2026, 2, 14),
        votes_for=9,
        votes_against=1,
        votes_abstained=0,
    )
    assert [clause.head.id for clause in book.clauses] == [
        *("1.1", "3.10", "4.1", "5.1", "6.1"),
        *("ladder.overdraw", "ladder.shirking", "quota.clams"),
    ]
    assert book.digest == hashlib.sha256(BOOK.encode()).hexdigest()


def test_an_unquoted_clause_number_keeps_its_last_nought() -> None:
    book = read(BOOK.replace('"3.10"', "3.10"))
    assert book.clauses[1].head.id == "3.10"


@pytest.mark.parametrize("written", ["no", "010", "12:30:00", "1e3", "0x1F", "2026-03-01", "true"])
def test_texts_stay_as_written(written: str) -> None:
    book = read(BOOK.replace("title: Forty kilos", f"title: {written}"))
    assert book.clauses[1].head.title == written


def test_a_whole_number_is_decimal() -> None:
    assert read(BOOK.replace("edition: 2", "edition: 010")).edition == 10


def test_a_clause_may_say_its_own_days() -> None:
    days = "in_force: {from: 2025-03-01, until: 2026-06-01}"
    book = read(BOOK.replace("    kind: reporting_duty", f"    {days}\n    kind: reporting_duty"))
    assert book.clause("5.1").head.in_force == DateRange(
        first=datetime.date(2025, 3, 1), until=datetime.date(2026, 6, 1)
    )


def test_line_ends_and_a_byte_order_mark_change_nothing_but_the_digest() -> None:
    windows = "\ufeff" + BOOK.replace("\n", "\r\n")
    assert read(windows).clauses == read(BOOK).clauses
    assert read(windows).digest != read(BOOK).digest


# Each case replaces a piece of the book; the caret stands where the problem must be reported.
WRONG = {
    "unknown top key": ("money: EUR", "money: EUR\n^colour: blue", "the key 'colour'", None),
    "misspelt key": (
        "counted_by: household",
        "^countd_by: household",
        "the key 'countd_by'",
        "counted_by",
    ),
    "missing key": ("{resource: clams, more_than: 40 kg,", "^{resource: clams,", "no", None),
    "misspelt kind": (
        "kind: quantity_limit",
        "kind: ^quantity_limits",
        "the kind",
        "quantity_limit",
    ),
    "misspelt resource": ("{resource: clams, more", "{resource: ^clms, more", "'clms'", "clams"),
    "misspelt ladder": ("or_else: overdraw", "or_else: ^overdrew", "'overdrew'", "overdraw"),
    "misspelt class": ("{class: licensed}", "{class: ^licenced}", "'licenced'", "licensed"),
    "misspelt span": ("per: day", "per: ^dya", "'dya'", "day"),
    "misspelt unit": ("more_than: 40 kg", "more_than: ^40 kgs", "'40 kgs'", "kg"),
    "unit of something else": ("more_than: 40 kg", "more_than: ^40 L", "'40 L'", None),
    "no unit": ("more_than: 40 kg", "more_than: ^40", "'40'", None),
    "nought": ("more_than: 40 kg", "more_than: ^0 kg", "'0 kg'", None),
    "allotment a day": (
        "more_than: 40 kg, per: day",
        "more_than: allotment, per: ^day",
        "'day'",
        None,
    ),
    "misspelt allotment": ("more_than: 40 kg", "more_than: ^alotment", "'alotment'", "allotment"),
    "percent as number": ("tolerance: 5 %", "tolerance: ^5", "'5'", None),
    "percent above all": ("tolerance: 5 %", "tolerance: ^101 %", "'101 %'", None),
    "wrong deontic": (
        "    must_not: withdraw\n    what: {resource: clams, more",
        "    ^must: withdraw\n    what: {resource: clams, more",
        "'must: withdraw'",
        "must_not",
    ),
    "wrong verb": ("must: report", "must: ^reprot", "'must: reprot'", "report"),
    "deontic of none": (
        "kind: membership",
        "kind: membership\n    ^must: contribute",
        "the key 'must'",
        None,
    ),
    "misspelt deontic": ("must: contribute", "^mst: contribute", "'mst: contribute'", "must"),
    "empty value": ("or_else: overdraw", "or_else:^", "nothing after the key 'or_else'", None),
    "no such day": ("from: 10 April", "from: ^31 April", "'31 April'", None),
    "leap day": ("from: 10 April", "from: ^29 February", "'29 February'", None),
    "misspelt month": ("through: 30 April", "through: ^30 Arpil", "'30 Arpil'", "April"),
    "part of an hour": ("within: 48 h", "within: ^90 min", "'90 min'", None),
    "weight of time": ("within: 48 h", "within: ^48 kg", "'48 kg'", None),
    "other money": ("60 EUR/d", "^60 USD/d", "'60 USD/d'", None),
    "paid by the hour": ("60 EUR/d", "^60 EUR/h", "'60 EUR/h'", None),
    "a long day": ("day: 6 h", "day: ^25 h", "'25 h'", None),
    "fine in kilos of work": (
        "or_else: shirking",
        "or_else: ^overdraw",
        "the ladder 'overdraw', which fines for each kg",
        None,
    ),
    "fine in other money": ("flat: 40 EUR", "flat: ^40 GBP", "'40 GBP'", None),
    "half a cent": ("flat: 40 EUR", "flat: ^0.005 EUR", "'0.005 EUR'", None),
    "cap on a flat fine": (
        "{flat: 40 EUR}",
        "{flat: 40 EUR, at_most: ^50 EUR}",
        "'50 EUR'",
        None,
    ),
    "two ways to fine": (
        "{flat: 40 EUR}",
        "^{flat: 40 EUR, per_excess: 1 EUR/h}",
        "a fine with both or neither of them",
        None,
    ),
    "two sanctions in a step": (
        "- suspension: {days: 14}",
        "- ^suspension: {days: 14}\n        warning: {}",
        "2 sanctions in one step",
        None,
    ),
    "misspelt step": ("- suspension:", "- ^suspention:", "the key 'suspention'", "suspension"),
    "no steps": ("    steps:\n      - fine: {flat: 40 EUR}", "    steps: ^[]", "an empty", None),
    "steps not listed": ("steps:\n      - fine: {flat: 40 EUR}", "steps: ^{}", "a mapping", None),
    "part of a day": (
        "window: 730 d\n    steps:\n      - warning",
        "window: ^1.5 d\n    steps:\n      - warning",
        "'1.5 d'",
        None,
    ),
    "quota of nothing": ("quota:\n  clams:", "quota:\n  ^clam:", "'clam'", "clams"),
    "misspelt rule": ("kind: hockey_stick", "kind: ^hockey_stik", "the kind", "hockey_stick"),
    "rule without kind": ("{kind: hockey_stick, ", "^{", "no 'kind'", None),
    "rule not a mapping": (
        "{kind: hockey_stick, limit: 0.2 K, trigger: 0.5 K, fraction: 0.8 Fmsy}",
        "^[]",
        "a list",
        None,
    ),
    "trigger below the limit": ("trigger: 0.5 K", "trigger: ^0.2 K", "'0.2 K'", None),
    "fraction of the stock": ("0.8 Fmsy", "^0.8 K", "'0.8 K'", None),
    "misspelt point": ("fraction: 0.8 Fmsy", "fraction: ^0.8 Fmys", "'0.8 Fmys'", "Fmsy"),
    "catch not observed": ("[survey, catch]", "^[survey]", "a list", None),
    "shape of a Schaefer": (
        "growth: schaefer",
        "growth: ^schaefer\n    shape: 1",
        "growth schaefer with a 'shape'",
        None,
    ),
    "zones named twice": (
        "zones: [north_bar]",
        "zones: ^[north_bar, north_bar]",
        "'north_bar' more than once",
        None,
    ),
    "zones not listed": ("zones: [north_bar]", "zones: ^north_bar", "'north_bar'", None),
    "zone in capitals": ("zones: [north_bar]", "zones: [^North Bar]", "'North Bar'", None),
    "id twice": ('id: "4.1"', 'id: ^"3.10"', "the id '3.10' a second time", None),
    "id of a ladder": ('id: "4.1"', "id: ^ladder.overdraw", "'ladder.overdraw'", None),
    "no such date": ("from: 2026-03-01", "from: ^2026-02-30", "'2026-02-30'", None),
    "in force before adopted": ("from: 2026-03-01", "from: ^2026-02-13", "'2026-02-13'", None),
    "ends before it begins": (
        "{from: 2026-03-01}",
        "{from: 2026-03-01, until: ^2026-03-01}",
        "'2026-03-01'",
        None,
    ),
    "never in force": (
        "kind: reporting_duty",
        "in_force: ^{from: 2020-01-01, until: 2021-01-01}\n    kind: reporting_duty",
        "days on which this edition is never in force",
        None,
    ),
    "no such time zone": ("Europe/Dublin", "^Europe/Dubin", "'Europe/Dubin'", "Europe/Dublin"),
    "path as time zone": ("Europe/Dublin", "^../../etc/passwd", "'../../etc/passwd'", None),
    "no such money": ("money: EUR", "money: ^EURO", "'EURO'", "EUR"),
    "base of another measure": ("{unit: kg, base: g}", "{unit: kg, base: ^L}", "'L'", None),
    "base larger than the unit": ("{unit: kg, base: g}", "{unit: kg, base: ^t}", "'t'", None),
    "votes in words": ("for: 9", "for: ^nine", "'nine'", None),
    "edition nought": ("edition: 2", "edition: ^0", "'0'", None),
    "clause is a text": ("clauses:\n", "clauses:\n  - ^be kind\n", "'be kind'", None),
    "title over two lines": ("title: Slips", 'title: ^"a\\nb"', "'a\\nb'", None),
    "text is empty": ("text: On paper.", 'text: ^""', "''", None),
}


@pytest.mark.parametrize("case", WRONG)
def test_one_mistake_is_one_problem_at_its_place(case: str) -> None:
    right, wrong, found, nearest = WRONG[case]
    assert right in BOOK
    marked = BOOK.replace(right, wrong, 1)
    before = marked[: marked.index("^")]
    (problem,) = problems_of(marked.replace("^", "", 1))
    assert (problem.line, problem.column) == (
        before.count("\n") + 1,
        len(before) - before.rfind("\n"),
    )
    assert problem.file == "bylaws.yaml"
    assert problem.found.startswith(found)
    assert problem.nearest == nearest


def test_a_problem_says_where_what_and_what_instead() -> None:
    (problem,) = problems_of(BOOK.replace("or_else: overdraw", "or_else: overdrew"))
    assert str(problem) == (
        "bylaws.yaml, line 22, column 14: found 'overdrew'; accepted is a ladder of this book: "
        "'overdraw', 'shirking'; did you mean 'overdraw'?"
    )


def test_every_problem_of_a_text_is_named_at_once() -> None:
    text = (
        BOOK.replace("edition: 2", "edition: two")
        .replace("{class: licensed}", "{class: licenced}")
        .replace("tolerance: 5 %", "tolerence: 5 %")
        .replace("must: report", "must_not: report")
        .replace("flat: 40 EUR", "flat: 40 euro")
        .replace("limit: 0.2 K", "limit: 0.2")
        .replace('id: "6.1"', 'id: "5.1"')
    )
    assert [(each.line, each.column) for each in problems_of(text)] == [
        *((2, 10), (19, 18), (21, 80), (34, 5), (37, 9), (56, 22), (63, 39)),
    ]


def test_the_error_carries_its_problems_and_prints_them() -> None:
    with pytest.raises(UnreadableBook) as refused:
        read(BOOK.replace("per: day", "per: dya").replace("zone: Europe/Dublin", "zone: Atlantis"))
    assert refused.value.code == "bylaws.unreadable_book"
    assert str(refused.value).splitlines() == [
        "The book cannot be read (2 problems).",
        *(str(problem) for problem in refused.value.problems),
    ]
    assert refused.value.facts["problems"] == refused.value.problems


def test_a_clause_without_a_kind_is_pointed_at() -> None:
    (problem,) = problems_of(BOOK.replace("    kind: reporting_duty\n", ""))
    assert (problem.line, problem.column, problem.found) == (31, 5, "no 'kind'")


def test_a_missing_deontic_is_pointed_at() -> None:
    (problem,) = problems_of(BOOK.replace("    must: report\n", ""))
    assert (problem.line, problem.column, problem.found) == (31, 5, "no 'must'")
    assert problem.accepted == "'must: report' in a clause of kind 'reporting_duty'"


def test_missing_keys_of_one_mapping_are_named_together() -> None:
    (problem,) = problems_of(BOOK.replace("{by: board, approvals: 2}", "{}"))
    assert problem.found == "no 'by', 'approvals'"
    assert (problem.line, problem.column) == (67, 14)


def test_a_growth_rule_needs_growth_and_order() -> None:
    (problem,) = problems_of(BOOK.replace("    growth: schaefer\n", ""))
    assert problem.found == "no 'growth' beside a rule for a modelled stock"


def test_a_survey_rate_models_no_stock() -> None:
    start = BOOK.index("    observe")
    survey = "    observe: [survey]\n    rule: {kind: survey_rate, rate: 15 %}\n"
    rest = BOOK[BOOK.index("    review") :]
    quota = read(BOOK[:start] + survey + rest).clause("quota.clams")
    assert isinstance(quota, clauses.PoolTotal)
    assert quota.method == clauses.BySurvey(rate=Fraction(3, 20))
    for modelled in (
        "growth: schaefer",
        "order: take_then_grow",
        "risk: {below: 1 K, at_most: 1 %}",
    ):
        (problem,) = problems_of(BOOK[:start] + survey + f"    {modelled}\n" + rest)
        assert problem.found == f"the key {modelled.split(':')[0]!r} beside a survey rate"


def test_names_pass_where_their_declaration_is_unreadable() -> None:
    # Forty clauses should not each be wrong because the list of resources is.
    resources = BOOK[BOOK.index("resources:") : BOOK.index("clauses:")]
    (problem,) = problems_of(BOOK.replace(resources, "resources: none\n"))
    assert problem.found == "'none'"


@pytest.fixture(scope="module")
def book() -> clauses.Book:
    return documents.read(text=FIXTURE.read_text(encoding="utf-8"), name=FIXTURE.name)


class TestTarrinBay:
    """The book of the invented cooperative, against what was agreed about it."""

    def test_its_clauses(self, book: clauses.Book) -> None:
        assert [clause.head.id for clause in book.clauses] == [
            *("1.1", "2.1", "2.2", "2.3", "2.4", "3.1", "3.2", "4.1", "4.2", "5.1", "6.1", "7.1"),
            *("7.3", "7.4", "8.1", "ladder.overdraw", "ladder.closure", "ladder.paperwork"),
            *("ladder.shirking", "quota.mullet", "quota.clams"),
        ]

    def test_every_clause_has_words_for_members(self, book: clauses.Book) -> None:
        assert all(clause.head.title and len(clause.head.text) > 40 for clause in book.clauses)

    def test_a_daily_limit(self, book: clauses.Book) -> None:
        limit = book.clause("3.1")
        assert isinstance(limit, clauses.QuantityLimit)
        assert (limit.resource, limit.per, limit.counted_by, limit.tolerance) == (
            *("mullet", Per.DAY, clauses.CountedBy.HOUSEHOLD, Fraction(1, 20)),
        )
        assert limit.more_than == Amount(number=Fraction(90), unit="kg")
        assert (limit.head.who, limit.head.or_else) == ("licensed", "ladder.overdraw")

    def test_the_season_limits_are_the_allotments(self, book: clauses.Book) -> None:
        limits = [book.clause(clause_id) for clause_id in ("2.3", "2.4")]
        assert [
            (each.resource, each.more_than, each.per, each.tolerance)
            for each in limits
            if isinstance(each, clauses.QuantityLimit)
        ] == [
            ("mullet", None, Per.SEASON, Fraction(3, 100)),
            ("clams", None, Per.SEASON, Fraction(0)),
        ]

    def test_the_ladder_for_taking_too_much(self, book: clauses.Book) -> None:
        ladder = book.clause("ladder.overdraw")
        assert isinstance(ladder, clauses.SanctionLadder)
        assert (ladder.window_days, ladder.restore) == (730, True)
        assert ladder.steps == (
            clauses.Warning(),
            clauses.Fine(
                flat=None,
                per_excess=Price(money=Money(number=Fraction(3), currency="EUR"), per="kg"),
                at_most=Money(number=Fraction(200), currency="EUR"),
            ),
            clauses.Suspension(days=14),
            clauses.Referral(body="assembly"),
        )

    def test_the_work_duty(self, book: clauses.Book) -> None:
        duty = book.clause("6.1")
        assert isinstance(duty, clauses.WorkDuty)
        assert (duty.days, duty.day_minutes) == (Fraction(2), 360)
        assert duty.instead == Price(money=Money(number=Fraction(60), currency="EUR"), per="d")

    def test_the_quotas(self, book: clauses.Book) -> None:
        mullet, clams = book.clause("quota.mullet"), book.clause("quota.clams")
        assert isinstance(mullet, clauses.PoolTotal) and isinstance(clams, clauses.PoolTotal)
        assert mullet.method == clauses.ByGrowthModel(
            growth=clauses.Growth.SCHAEFER,
            shape=None,
            sequence=clauses.Sequence.TAKE_THEN_GROW,
            rule=clauses.HockeyStick(
                limit=clauses.Reference(multiple=Fraction(1, 5), of="K"),
                trigger=clauses.Reference(multiple=Fraction(1, 2), of="K"),
                fraction=clauses.Reference(multiple=Fraction(4, 5), of="Fmsy"),
            ),
        )
        assert (mullet.up_at_most, mullet.down_at_most) == (Fraction(1, 5), Fraction(3, 10))
        assert clams.method == clauses.BySurvey(rate=Fraction(3, 20))
        assert (clams.review_days, clams.confirm_by, clams.approvals) == (45, "board", 2)
