from datetime import date
from fractions import Fraction

import pytest

from governance import facts, quantities
from governance.bylaws import clauses, editions
from governance.compliance import findings, judge
from governance.periods import OPEN_END, DateRange, Per
from tests.governance.compliance import scenes
from tests.governance.compliance.scenes import Take

GRAM = Fraction(1, 1000)


def found(
    clause: clauses.Clause, known: facts.SeasonFacts, *, as_of: date = scenes.AFTER
) -> tuple[findings.Finding, ...]:
    return judge.judge(editions=scenes.one(clause), facts=known, as_of=as_of)


class TestTolerance:
    """A daily limit of 40 kg with 5 %: the ceiling is 42 kg."""

    def test_forty_three_kilos_are_one_beyond_the_ceiling_and_three_beyond_the_limit(self):
        known = scenes.season((Take(entry=1201, kg=25), Take(entry=1207, member=3, kg=18)))
        (one,) = found(scenes.limit(), known)
        assert one.key == findings.Key(
            clause="3.2",
            subject_kind=findings.SubjectKind.HOUSEHOLD,
            subject=1,
            resource="clams",
            window=scenes.days(date(2026, 4, 3), date(2026, 4, 3)),
        )
        assert (one.total, one.limit, one.breach, one.overuse) == (43_000, 40_000, 1_000, 3_000)
        assert (one.edition, one.or_else, one.base) == (4, "ladder.overdraw", "g")
        assert one.entries == (1201, 1207)
        assert one.working == (
            "Entries 1201, 1207: 25 kg + 18 kg = 43 kg on 2026-04-03.",
            "Limit 40 kg; with 5 % tolerance 42 kg.",
            "Beyond the limit 3 kg; beyond limit and tolerance 1 kg.",
        )

    @pytest.mark.parametrize("kg", [40, 40 + GRAM, 42])
    def test_up_to_the_ceiling_is_no_breach(self, kg):
        assert found(scenes.limit(), scenes.season((Take(entry=1, kg=kg),))) == ()

    def test_one_gram_over_the_ceiling_is_a_breach_of_one_gram(self):
        (one,) = found(scenes.limit(), scenes.season((Take(entry=1, kg=42 + GRAM),)))
        assert (one.breach, one.overuse) == (1, 2_001)

    def test_without_tolerance_one_gram_over_the_limit_is_a_breach(self):
        clause = scenes.limit(tolerance=Fraction(0))
        assert found(clause, scenes.season((Take(entry=1, kg=40),))) == ()
        (one,) = found(clause, scenes.season((Take(entry=1, kg=40 + GRAM),)))
        assert (one.breach, one.overuse) == (1, 1)
        assert one.working[1:] == ("Limit 40 kg, without tolerance.", "Beyond it 0.001 kg.")

    def test_the_ceiling_is_rounded_down(self):
        # 33 g and 5 % are 34.65 g: 34 g keep the rule, 35 g do not.
        clause = scenes.limit(more_than="33 g")
        assert found(clause, scenes.season((Take(entry=1, kg=34 * GRAM),))) == ()
        (one,) = found(clause, scenes.season((Take(entry=1, kg=35 * GRAM),)))
        assert (one.breach, one.overuse) == (1, 2)

    def test_overpumping_tolerance_of_a_groundwater_judgment(self):
        # Central and West Coast Basins, Los Angeles County: an allocation of 500 with a 20 %
        # overpumping tolerance (from memory); figures of the uses invented. 690 used: all 190 are
        # owed back, 90 lie beyond the tolerance; 560 used breaks nothing.
        clause = scenes.limit(
            more_than="500 kg", per=Per.SEASON, tolerance=quantities.percent("20 %")
        )
        assert found(clause, scenes.season((Take(entry=1, kg=560),))) == ()
        (one,) = found(clause, scenes.season((Take(entry=1, kg=690),)))
        assert (one.breach, one.overuse) == (90_000, 190_000)


class TestWindows:
    def test_days_end_at_midnight(self):
        known = scenes.season(
            (
                Take(entry=1, kg=30, day=date(2026, 4, 3)),
                Take(entry=2, kg=30, day=date(2026, 4, 4)),
            )
        )
        assert found(scenes.limit(), known) == ()

    def test_a_week_runs_from_monday_to_sunday(self):
        # 2026-04-06 is a Monday.
        clause = scenes.limit(per=Per.ISO_WEEK)
        over = scenes.season(
            (
                Take(entry=1, kg=30, day=date(2026, 4, 6)),
                Take(entry=2, kg=30, day=date(2026, 4, 12)),
            )
        )
        (one,) = found(clause, over)
        assert one.key.window == scenes.days(date(2026, 4, 6), date(2026, 4, 12))
        assert one.total == 60_000
        apart = scenes.season(
            (
                Take(entry=1, kg=30, day=date(2026, 4, 5)),
                Take(entry=2, kg=30, day=date(2026, 4, 6)),
            )
        )
        assert found(clause, apart) == ()

    def test_a_month_is_a_calendar_month(self):
        clause = scenes.limit(per=Per.MONTH)
        known = scenes.season(
            (
                Take(entry=1, kg=30, day=date(2026, 4, 1)),
                Take(entry=2, kg=30, day=date(2026, 4, 30)),
                Take(entry=3, kg=30, day=date(2026, 5, 1)),
            )
        )
        (one,) = found(clause, known)
        assert one.key.window == scenes.days(date(2026, 4, 1), date(2026, 4, 30))
        assert one.entries == (1, 2)

    def test_windows_are_cut_to_the_season(self):
        # The season begins on Sunday 2026-03-01, in the week from 2026-02-23, and ends on Sunday
        # 2026-06-28, before June does.
        weekly = found(
            scenes.limit(per=Per.ISO_WEEK),
            scenes.season((Take(entry=1, kg=50, day=date(2026, 3, 1)),)),
        )
        assert weekly[0].key.window == scenes.days(date(2026, 3, 1), date(2026, 3, 1))
        monthly = found(
            scenes.limit(per=Per.MONTH),
            scenes.season((Take(entry=1, kg=50, day=date(2026, 6, 28)),)),
        )
        assert monthly[0].key.window == scenes.days(date(2026, 6, 1), date(2026, 6, 28))

    def test_a_season_is_the_whole_window(self):
        known = scenes.season(
            (
                Take(entry=1, kg=30, day=date(2026, 3, 1)),
                Take(entry=2, kg=30, day=date(2026, 6, 28)),
            )
        )
        (one,) = found(scenes.limit(per=Per.SEASON), known)
        assert one.key.window == scenes.SEASON
        assert one.working[0] == (
            "Entries 1, 2: 30 kg + 30 kg = 60 kg from 2026-03-01 to 2026-06-28."
        )

    def test_a_long_list_of_entries_is_counted(self):
        known = scenes.season(tuple(Take(entry=10 + n, kg=5) for n in range(9)))
        (one,) = found(scenes.limit(), known)
        assert one.working[0] == "9 entries from 10 to 18: 45 kg on 2026-04-03."


class TestHolders:
    def test_counted_by_member_each_member_has_the_limit(self):
        known = scenes.season((Take(entry=1, kg=25), Take(entry=2, member=3, kg=45)))
        (one,) = found(scenes.limit(counted_by=clauses.CountedBy.MEMBER), known)
        assert one.key.subject_kind is findings.SubjectKind.MEMBER
        assert (one.key.subject, one.total) == (3, 45_000)

    def test_a_household_is_named_by_its_first_member(self):
        members = (scenes.member(6), scenes.member(43, household=6))
        known = scenes.season((Take(entry=1, member=43, kg=50),), members=members)
        (one,) = found(scenes.limit(), known)
        assert one.key.subject == 6

    def test_takes_of_members_outside_the_class_are_out_of_reach(self):
        licensed_until_april = DateRange(first=date(2026, 1, 1), until=date(2026, 4, 3))
        members = (scenes.member(1, classes={"licensed": licensed_until_april}),)
        clause = scenes.limit(who="licensed")
        on_the_last_day = scenes.season(
            (Take(entry=1, kg=50, day=date(2026, 4, 2)),), members=members
        )
        assert len(found(clause, on_the_last_day)) == 1
        the_day_after = scenes.season(
            (Take(entry=1, kg=50, day=date(2026, 4, 3)),), members=members
        )
        assert found(clause, the_day_after) == ()

    def test_only_bound_members_takes_are_added_up_in_a_household(self):
        members = (
            scenes.member(1),
            scenes.member(3, household=1, classes={"retired": scenes.ALWAYS}),
        )
        known = scenes.season(
            (Take(entry=1, kg=43), Take(entry=2, member=3, kg=43)), members=members
        )
        (one,) = found(scenes.limit(who="licensed"), known)
        assert (one.total, one.entries) == (43_000, (1,))

    def test_what_others_of_the_household_take_does_not_make_a_breach(self):
        members = (
            scenes.member(1),
            scenes.member(3, household=1, classes={"retired": scenes.ALWAYS}),
        )
        known = scenes.season(
            (Take(entry=1, kg=40), Take(entry=2, member=3, kg=43)), members=members
        )
        assert found(scenes.limit(who="licensed"), known) == ()


class TestAllotments:
    CLAUSE = scenes.limit(
        "2.4",
        more_than=None,
        per=Per.SEASON,
        counted_by=clauses.CountedBy.MEMBER,
        tolerance=Fraction(3, 100),
    )

    def test_the_limit_is_the_members_allotment(self):
        known = scenes.season(
            (Take(entry=1, kg=104), Take(entry=2, member=2, kg=104)),
            allotments={("clams", 1): 100_000, ("clams", 2): 101_000, ("mullet", 1): 1},
        )
        (one,) = found(self.CLAUSE, known)
        # 100 kg and 3 % are 103 kg; 101 kg and 3 % are 104.03 kg.
        assert (one.key.subject, one.limit, one.breach, one.overuse) == (1, 100_000, 1_000, 4_000)
        assert one.working[1] == "Allotment 100 kg; with 3 % tolerance 103 kg."

    def test_a_household_has_the_sum_of_its_members(self):
        clause = scenes.limit(more_than=None, per=Per.SEASON, tolerance=Fraction(0))
        known = scenes.season(
            (Take(entry=1, kg=25), Take(entry=2, member=3, kg=6)),
            allotments={("clams", 1): 20_000, ("clams", 3): 10_000},
        )
        (one,) = found(clause, known)
        assert (one.limit, one.breach) == (30_000, 1_000)

    def test_a_missing_allotment_is_nothing(self):
        (one,) = found(self.CLAUSE, scenes.season((Take(entry=1, kg=GRAM),)))
        assert (one.limit, one.breach) == (0, 1)

    def test_a_debt_from_before_is_not_fined_again(self):
        # Member 1 still owes 100 kg and takes 10: no more than those 10 are beyond the limit.
        known = scenes.season((Take(entry=1, kg=10),), allotments={("clams", 1): -100_000})
        (one,) = found(self.CLAUSE, known)
        assert (one.limit, one.breach, one.overuse) == (0, 10_000, 10_000)

    def test_a_debt_does_not_lower_what_others_of_the_household_may_take(self):
        clause = scenes.limit(more_than=None, per=Per.SEASON, tolerance=Fraction(0))
        allotments = {("clams", 1): 20_000, ("clams", 3): -15_000}
        assert found(clause, scenes.season((Take(entry=1, kg=20),), allotments=allotments)) == ()
        over = scenes.season((Take(entry=1, kg=21),), allotments=allotments)
        assert [(one.limit, one.breach) for one in found(clause, over)] == [(20_000, 1_000)]

    def test_a_very_large_allotment_keeps_its_exact_ceiling(self):
        # 40,000,000,000,003 g and 33.3333 % are 53,333,320,000,003.999999 g, rounded down; the
        # product with the numerator 333,333 alone would pass 64 bits.
        clause = scenes.limit(
            more_than=None, per=Per.SEASON, tolerance=quantities.percent("33.3333 %")
        )
        allotments = {("clams", 1): 40_000_000_000_003}
        ceiling = 53_333_320_000_003
        at_it = scenes.season((Take(entry=1, kg=ceiling * GRAM),), allotments=allotments)
        assert found(clause, at_it) == ()
        beyond = scenes.season((Take(entry=1, kg=(ceiling + 1) * GRAM),), allotments=allotments)
        (one,) = found(clause, beyond)
        assert (one.breach, one.overuse) == (1, 13_333_320_000_001)


class TestUnits:
    def test_a_limit_in_another_measure_is_refused(self):
        with pytest.raises(quantities.UnitMismatch):
            found(scenes.limit(more_than="40 L"), scenes.season((Take(entry=1),)))

    def test_a_book_that_counts_in_another_base_unit_is_refused(self):
        known = scenes.season((Take(entry=1),))
        in_tonnes = facts.Withdrawals(
            resource="clams",
            base="t",
            zones=scenes.ZONES,
            **{
                name: getattr(known.withdrawals[0], name)
                for name in ("entry", "member", "day", "instant", "reported", "amount", "zone")
            },
        )
        other = scenes.season()
        mixed = facts.SeasonFacts(
            season=other.season,
            roster=other.roster,
            withdrawals=(in_tonnes,),
            work=other.work,
            money=other.money,
            orders=(),
            allotments={},
        )
        with pytest.raises(quantities.UnitMismatch):
            found(scenes.limit(), mixed)


class TestEditions:
    """A stricter edition comes into force on Wednesday 2026-04-15."""

    CHANGE = date(2026, 4, 15)

    def judged(self, per: Per, *takes: Take) -> list[tuple[int, int]]:
        old = DateRange(first=date(2020, 1, 1), until=self.CHANGE)
        new = DateRange(first=self.CHANGE, until=OPEN_END)
        books = (
            scenes.book(scenes.limit(per=per, more_than="40 kg"), edition=4, in_force=old),
            scenes.book(
                scenes.limit(per=per, more_than="20 kg"), edition=5, in_force=new, digest="b1" * 32
            ),
        )
        answer = judge.judge(
            editions=editions.Editions(books=books),
            facts=scenes.season(takes),
            as_of=scenes.AFTER,
        )
        return [(one.edition, one.limit) for one in answer]

    def test_a_day_is_judged_by_the_edition_of_the_day(self):
        assert self.judged(Per.DAY, Take(entry=1, kg=30, day=date(2026, 4, 14))) == []
        assert self.judged(Per.DAY, Take(entry=1, kg=30, day=date(2026, 4, 15))) == [(5, 20_000)]

    def test_a_week_open_at_the_change_is_judged_by_the_old_edition(self):
        thursday = Take(entry=1, kg=30, day=date(2026, 4, 16))
        assert self.judged(Per.ISO_WEEK, thursday) == []
        more = Take(entry=2, kg=20, day=date(2026, 4, 17))
        assert self.judged(Per.ISO_WEEK, thursday, more) == [(4, 40_000)]

    def test_the_next_week_is_judged_by_the_new_edition(self):
        monday = Take(entry=1, kg=30, day=date(2026, 4, 20))
        assert self.judged(Per.ISO_WEEK, monday) == [(5, 20_000)]

    def test_a_season_open_at_the_change_is_judged_by_the_old_edition(self):
        late = Take(entry=1, kg=43, day=date(2026, 6, 1))
        assert self.judged(Per.SEASON, late) == [(4, 40_000)]

    def test_a_clause_with_its_own_dates_judges_windows_that_begin_within_them(self):
        clause = scenes.limit(in_force=DateRange(first=date(2026, 4, 3), until=date(2026, 4, 4)))
        takes = [Take(entry=n, kg=50, day=date(2026, 4, n)) for n in (2, 3, 4)]
        assert [one.entries for one in found(clause, scenes.season(takes))] == [(3,)]
