import hashlib
from dataclasses import replace
from datetime import date

import numpy as np

from governance import facts
from governance.bylaws import editions
from governance.compliance import evidence, judge
from tests.governance.compliance import scenes
from tests.governance.compliance.scenes import Take


class TestGrouped:
    TABLE = scenes.withdrawals(Take(entry=number) for number in (9, 2, 5, 4, 7))

    def grouped(self, rows: list[int]) -> list[tuple[int, list[int]]]:
        by = facts.column([5, 0, 5, 7, 9])
        return [
            (group, [act.entry for act in acts])
            for group, acts in evidence.grouped(table=self.TABLE, rows=facts.column(rows), by=by)
        ]

    def test_acts_come_group_by_group_in_order_of_entry(self):
        assert self.grouped([0, 2, 3, 4]) == [(5, [5, 9]), (7, [4]), (9, [7])]

    def test_the_order_of_rows_is_no_input(self):
        assert self.grouped([4, 3, 2, 0]) == self.grouped([0, 2, 3, 4])

    def test_no_rows_make_no_group(self):
        assert self.grouped([]) == []


class TestActs:
    def test_acts_name_their_zone_and_resource(self):
        table = scenes.withdrawals((Take(entry=9), Take(entry=2, zone="pier_sand", kg=3)))
        acts = evidence.acts(table=table, rows=np.arange(2))
        assert [(act.entry, act.zone) for act in acts] == [(9, "anvil_sand"), (2, "pier_sand")]
        assert (acts[1].amount, acts[1].resource) == (3_000, "clams")

    def test_an_entry_of_two_rows_is_one_entry(self):
        table = scenes.withdrawals((Take(entry=2), Take(entry=2, zone="pier_sand")))
        assert evidence.entries(evidence.acts(table=table, rows=np.arange(2))) == (2,)


class TestDigest:
    KNOWN = (Take(entry=1207, member=3, kg=18), Take(entry=1201, kg=25))

    def inputs(self, *takes: Take, digest: str = "b0" * 32) -> str:
        book = replace(scenes.book(scenes.limit()), digest=digest)
        (one,) = judge.judge(
            editions=editions.Editions(books=(book,)),
            facts=scenes.season(takes or self.KNOWN),
            as_of=scenes.AFTER,
        )
        return one.inputs

    def test_anyone_can_recompute_it(self):
        # 2026-04-03 is day 20546; its noon in UTC is 1775217600 s after 1970.
        text = "\n".join(
            (
                "b0" * 32,
                "3.2\thousehold\t1\tclams\t2026-04-03\t2026-04-04",
                "40000",
                "1201\t1\tclams\t20546\t1775217600000000\t1775221200000000\t25000\tanvil_sand",
                "1207\t3\tclams\t20546\t1775217600000000\t1775221200000000\t18000\tanvil_sand",
            )
        )
        assert self.inputs() == hashlib.sha256(text.encode()).hexdigest()

    def test_the_book_and_every_used_field_are_in_it(self):
        first, second = self.KNOWN
        answers = [
            self.inputs(),
            self.inputs(digest="b1" * 32),
            self.inputs(replace(first, entry=1208), second),
            self.inputs(replace(first, member=1), second),
            self.inputs(replace(first, kg=19), second),
            self.inputs(replace(first, zone="pier_sand"), second),
            self.inputs(replace(first, delay_min=61), second),
            self.inputs(*(replace(each, day=date(2026, 4, 4)) for each in self.KNOWN)),
        ]
        assert len(set(answers)) == len(answers)

    def test_what_was_not_used_is_not_in_it(self):
        another_day = Take(entry=1300, day=date(2026, 4, 9), kg=5)
        another_member = Take(entry=1301, member=2, kg=5)
        assert self.inputs(*self.KNOWN, another_day, another_member) == self.inputs()


def test_acts_of_one_day_name_it():
    table = scenes.withdrawals((Take(entry=1, day=date(2026, 4, 3)),))
    acts = evidence.acts(table=table, rows=np.arange(1))
    assert evidence.day_of(acts) == scenes.days(date(2026, 4, 3), date(2026, 4, 3))
