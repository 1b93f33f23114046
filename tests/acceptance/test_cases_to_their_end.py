"""The cases that the scenario walks to their end: who did what, when, why, and for how much.

Every day is counted by hand from acts.yaml and the book. A slip entered in the evening is judged
and noted on the next day; the secretary takes a case up two days later and hands the notice over
after three more; the member has 14 days to answer, or 7 where no more than a warning can follow;
the board decides on the next Tuesday, and the reasons are handed over a day later; 21 days after
that the decision is final. Money is paid on the tenth day from then.
"""

from collections import Counter
from collections.abc import Mapping
from datetime import date
from fractions import Fraction
from statistics import median

import pytest

from ledger.cases import queries as cases
from ledger.cases.queries import CaseRecord
from ledger.journal import queries as journal
from ledger.reports.figures import CaseStepRow
from tests.acceptance import played
from tests.acceptance.played import PlayedSeason

BOARD = {5, 12, 27, 30, 36}
SECRETARY = 3
ACTS = played.page("acts.yaml")["acts"]
Walk = list[tuple[str, str, object]]

# Household 17 four times over 90 kg of mullet: 99.5, 104, 108.5 and 121.5 kg (planted.csv).
WARNED: Walk = [
    ("2026-03-09", "note", "book"),
    ("2026-03-11", "check", SECRETARY),
    ("2026-03-14", "tell", SECRETARY),
    ("2026-03-17", "answer", 17),
    ("2026-03-24", "decide", "officer"),
    ("2026-03-25", "open_appeal", "book"),
    ("2026-04-16", "let_stand", "book"),
    ("2026-04-17", "complete", SECRETARY),
]
# The warning is not final on the day of this notice, but may be by the decision: so 14 days.
FINED: Walk = [
    ("2026-04-10", "note", "book"),
    ("2026-04-12", "check", SECRETARY),
    ("2026-04-15", "tell", SECRETARY),
    ("2026-04-30", "close_silence", "book"),
    ("2026-05-05", "decide", "officer"),
    ("2026-05-06", "open_appeal", "book"),
    ("2026-05-28", "let_stand", "book"),
    ("2026-06-07", "complete", SECRETARY),
]
SUSPENDED: Walk = [
    ("2026-05-15", "note", "book"),
    ("2026-05-17", "check", SECRETARY),
    ("2026-05-20", "tell", SECRETARY),
    ("2026-06-04", "close_silence", "book"),
    ("2026-06-09", "decide", "officer"),
    ("2026-06-10", "open_appeal", "book"),
    ("2026-07-02", "let_stand", "book"),
]
# The letter did not arrive; a week later the notice was handed over, and the days count from then.
REFERRED: Walk = [
    ("2026-06-09", "note", "book"),
    ("2026-06-11", "check", SECRETARY),
    ("2026-06-14", "tell", SECRETARY),
    ("2026-06-21", "attempt", SECRETARY),
    ("2026-07-06", "close_silence", "book"),
    ("2026-07-07", "decide", "officer"),
    ("2026-07-08", "open_appeal", "book"),
    ("2026-07-30", "let_stand", "book"),
]

# Every fine charged: the clause's rate times what lies beyond limit and tolerance, in cents.
FINES = (
    (26, 15_750),  # 31.5 kg in closed water at 5 EUR
    (39, 9_250),  # 18.5 kg in closed water
    (34, 8_500),  # 17 kg from a closed ground
    (17, 2_850),  # 9.5 kg of mullet at 3 EUR, the second time
    (6, 1_800),  # 6 kg of mullet, the second time
    (6, 1_500),  # 5 kg of clams, while the case before was not final: the second step again
    (19, 1_050),  # 3.5 kg of clams, the second time
    (29, 1_000),  # the third late slip, and the two after it
    (29, 1_000),
    (29, 1_000),
)
UNPAID = {39: 9_250, 29: 1_000}


def _case(season: PlayedSeason, clause: str, subject: int, first: str) -> CaseRecord:
    return cases.case_on(
        commons_id=season.commons_id,
        clause=clause,
        subject=subject,
        first=date.fromisoformat(first),
    )


def _walk(case: CaseRecord) -> Walk:
    return [
        (event.on.isoformat(), event.move.value, event.actor.member or event.actor.role.value)
        for event in case.events
    ]


def _named(walk: Walk, case: CaseRecord) -> Walk:
    """Put the officer of a case, somebody of the board with no part in it, where a walk says so."""
    officer = case.so_far.officer
    assert officer in BOARD - case.so_far.subjects
    return [(day, move, officer if who == "officer" else who) for day, move, who in walk]


def _reason(case: CaseRecord, move: str) -> str:
    return next(event.reason for event in case.events if event.move == move)


def _words(act: str, clause: str, subject: int) -> Mapping[str, str]:
    """Return what somebody says in an act of the scenario."""
    found: Mapping[str, str] = next(
        each
        for each in ACTS
        if each["act"] == act
        and "case" in each
        and (str(each["case"]["clause"]), each["case"]["subject"]) == (clause, subject)
    )
    return found


class TestSetAside:
    def test_an_answer_is_accepted(self, season: PlayedSeason) -> None:
        case = _case(season, "5.1", 11, "2026-03-23")
        walk: Walk = [
            ("2026-03-27", "note", "book"),
            ("2026-03-29", "check", SECRETARY),
            ("2026-04-01", "tell", SECRETARY),
            ("2026-04-02", "answer", 11),
            ("2026-04-04", "set_aside", "officer"),
        ]
        assert _walk(case) == _named(walk, case)
        assert _reason(case, "answer") == _words("answer", "5.1", 11)["words"]
        act = _words("set_aside", "5.1", 11)
        assert _reason(case, "set_aside") == f"could_not_be_helped: {act['words']}"

    def test_facts_are_not_confirmed(self, season: PlayedSeason) -> None:
        case = _case(season, "5.1", 40, "2026-04-04")
        walk: Walk = [
            ("2026-04-08", "note", "book"),
            ("2026-04-10", "check", SECRETARY),
            ("2026-04-11", "set_aside", "officer"),
        ]
        assert _walk(case) == _named(walk, case)
        act = _words("set_aside", "5.1", 40)
        assert _reason(case, "set_aside") == f"facts_not_confirmed: {act['words']}"

    def test_a_correction_withdraws_the_finding(self, season: PlayedSeason) -> None:
        case = _case(season, "4.1", 13, "2026-04-14")
        walk: Walk = [
            ("2026-04-15", "note", "book"),
            ("2026-04-17", "check", SECRETARY),
            ("2026-04-23", "return_to_checking", "book"),
            ("2026-04-24", "set_aside", "officer"),
        ]
        assert _walk(case) == _named(walk, case)
        assert "was withdrawn" in _reason(case, "return_to_checking")
        assert not case.finding.standing
        assert case.finding.version == 2

    def test_the_correction_leaves_both_slips_with_its_reason(self, season: PlayedSeason) -> None:
        slips = [
            entry
            for entry in journal.entries(
                commons_id=season.commons_id, kinds=("withdrawal",), subject=13
            )
            if entry.facts["slip"] == "1515"
        ]
        wrong, right = slips
        assert wrong.facts["lines"][0]["zone"] == "inner_flats"
        assert right.facts["lines"][0]["zone"] == "north_bar"
        assert wrong.reversed_by is not None and right.reversed_by is None
        undone = journal.entry(commons_id=season.commons_id, number=wrong.reversed_by)
        correction = next(each for each in ACTS if each["act"] == "correct")
        assert undone.texts["reason"] == f"{correction['why']} {correction['words']}"
        assert (undone.day, undone.by) == (date(2026, 4, 22), SECRETARY)
        assert [(each.account, each.amount) for each in undone.postings] == [
            (each.account, -each.amount) for each in wrong.postings
        ]


class TestAppeals:
    def test_one_is_upheld_and_the_fine_is_paid(self, season: PlayedSeason) -> None:
        case = _case(season, "4.1", 26, "2026-04-22")
        walk: Walk = [
            ("2026-04-23", "note", "book"),
            ("2026-04-25", "check", SECRETARY),
            ("2026-04-28", "tell", SECRETARY),
            ("2026-04-30", "answer", 26),
            ("2026-05-05", "decide", "officer"),
            ("2026-05-06", "open_appeal", "book"),
            ("2026-05-25", "lodge_appeal", 26),
            ("2026-07-18", "uphold", "assembly"),
            ("2026-07-28", "complete", SECRETARY),
        ]
        assert _walk(case) == _named(walk, case)
        assert _reason(case, "lodge_appeal") == _words("appeal", "4.1", 26)["words"]
        assert _reason(case, "uphold") == _words("uphold", "4.1", 26)["words"]
        assert _charged(season, case) == {date(2026, 7, 18): 15_750}
        assert _paid(season, 26) == {date(2026, 7, 28): 15_750}

    def test_one_is_overturned_and_nothing_is_charged(self, season: PlayedSeason) -> None:
        case = _case(season, "4.2", 15, "2026-05-06")
        walk: Walk = [
            ("2026-05-07", "note", "book"),
            ("2026-05-09", "check", SECRETARY),
            ("2026-05-12", "tell", SECRETARY),
            ("2026-05-15", "answer", 15),
            ("2026-05-19", "decide", "officer"),
            ("2026-05-20", "open_appeal", "book"),
            ("2026-06-04", "lodge_appeal", 15),
            ("2026-07-18", "overturn", "assembly"),
        ]
        assert _walk(case) == _named(walk, case)
        assert _reason(case, "overturn") == _words("overturn", "4.2", 15)["words"]
        # 12.5 kg at 5 EUR: what the board had decided.
        assert case.so_far.amount_minor == 6_250
        assert _charged(season, case) == {}
        assert case.effects == ()

    @pytest.mark.parametrize(
        ("clause", "subject", "first"),
        [
            ("5.1", 5, "2026-04-07"),
            ("5.1", 12, "2026-04-15"),
            ("5.1", 36, "2026-06-05"),
            ("3.1", 27, "2026-05-27"),
        ],
    )
    def test_the_board_does_not_decide_on_its_own(
        self, season: PlayedSeason, clause: str, subject: int, first: str
    ) -> None:
        case = _case(season, clause, subject, first)
        assert ("2026-07-18", "decide", "assembly") in _walk(case)
        # Reasons on the 19th, 21 days to appeal: final on the 22nd day.
        assert case.so_far.final_on == date(2026, 8, 10)


class TestLadder:
    @pytest.mark.parametrize(
        ("first", "walk", "step", "amount"),
        [
            ("2026-03-08", WARNED, 0, 0),
            # 104 kg less 94.5 kg (90 kg and five parts in a hundred) at 3 EUR.
            ("2026-04-09", FINED, 1, 2_850),
            ("2026-05-14", SUSPENDED, 2, 0),
            ("2026-06-08", REFERRED, 3, 0),
        ],
    )
    def test_household_17_climbs_it(
        self, season: PlayedSeason, first: str, walk: Walk, step: int, amount: int
    ) -> None:
        case = _case(season, "3.1", 17, first)
        assert _walk(case) == _named(walk, case)
        assert (case.so_far.step, case.so_far.amount_minor) == (step, amount)
        measures = ("warning", "fine", "suspension", "referral")
        assert cases.measure(commons_id=season.commons_id, case=case) == measures[step]

    def test_what_lay_beyond_the_limit_is_given_back_every_time(self, season: PlayedSeason) -> None:
        given = {
            entry.day: entry.facts["amount"]
            for entry in journal.entries(
                commons_id=season.commons_id, kinds=("given_back",), subject=17
            )
        }
        # Beyond 90 kg, without the tolerance, on the day that each decision was final.
        assert given == {
            date(2026, 4, 16): 9_500,
            date(2026, 5, 28): 14_000,
            date(2026, 7, 2): 18_500,
            date(2026, 7, 30): 31_500,
        }

    def test_the_suspension_lasts_fourteen_days_from_the_day_after(
        self, season: PlayedSeason
    ) -> None:
        (entry,) = journal.entries(commons_id=season.commons_id, kinds=("suspension",))
        assert entry.subject == 17
        assert entry.facts["clause"] == "ladder.overdraw"
        # Until is the first day that is free again.
        assert (entry.facts["from"], entry.facts["until"]) == ("2026-07-03", "2026-07-17")

    def test_a_notice_that_did_not_arrive_is_handed_over_again(self, season: PlayedSeason) -> None:
        case = _case(season, "3.2", 22, "2026-04-22")
        attempts = [(each.on, each.means, each.proved) for each in case.so_far.deliveries]
        assert attempts == [(date(2026, 4, 28), "post", False), (date(2026, 5, 5), "hand", True)]
        # Seven days to answer a warning, from the day that the notice arrived.
        assert ("2026-05-13", "close_silence", "book") in _walk(case)

    def test_cases_stand_on_the_steps_counted_by_hand(self, season: PlayedSeason) -> None:
        found = {(row.ladder, row.step): _outcomes(row) for row in season.figures.cases.steps}
        # Opened, set aside, decided and standing, overturned, undecided.
        assert found == {
            ("ladder.overdraw", 1): (19, 0, 19, 0, 0),
            ("ladder.overdraw", 2): (4, 0, 4, 0, 0),
            ("ladder.overdraw", 3): (1, 0, 1, 0, 0),
            ("ladder.overdraw", 4): (1, 0, 1, 0, 0),
            ("ladder.closure", 1): (5, 1, 3, 1, 0),
            ("ladder.paperwork", 1): (26, 2, 24, 0, 0),
            ("ladder.paperwork", 2): (1, 0, 1, 0, 0),
            ("ladder.paperwork", 3): (3, 0, 3, 0, 0),
            ("ladder.shirking", 1): (4, 0, 4, 0, 0),
        }
        states = {row.label: row.count for row in season.figures.cases.states}
        assert states == {"set aside": 3, "overturned": 1, "final": 4, "done": 56}
        reasons = {row.label: row.count for row in season.figures.cases.set_aside}
        assert reasons == {"could not be helped": 1, "facts not confirmed": 2}

    def test_the_report_says_how_long_it_took(self, season: PlayedSeason) -> None:
        acted = {
            (row["clause"], int(row["subject"]), row["window_first"])
            for row in played.sheet("planted.csv")
        }
        to_told, to_decided = [], []
        for clause, subject, first in acted:
            events = {
                event.move.value: event for event in _case(season, clause, subject, first).events
            }
            told = next(
                (
                    events[move].on
                    for move in ("attempt", "tell")
                    if move in events and "return_to_checking" not in events
                ),
                None,
            )
            if told is not None:
                to_told.append((told - date.fromisoformat(first)).days)
                if "decide" in events:
                    to_decided.append((events["decide"].on - told).days)
        assert season.figures.cases.days_act_to_told == Fraction(median(to_told))
        assert season.figures.cases.days_told_to_decided == Fraction(median(to_decided))


class TestFines:
    def test_they_are_those_counted_by_hand(self, season: PlayedSeason) -> None:
        charged = Counter(
            (row.subject, row.facts["amount"])
            for row in journal.rows(commons_id=season.commons_id, kinds=("due_charged",))
        )
        assert charged == Counter(FINES)
        fines = next(row for row in season.figures.dues if row.kind == "fine")
        total = sum(amount for _, amount in FINES)
        assert (fines.count, fines.charged) == (len(FINES), total) == (10, 43_700)
        assert (fines.paid, fines.open) == (33_450, 10_250)

    def test_two_are_still_owed_and_their_cases_still_open(self, season: PlayedSeason) -> None:
        standing = {row.member: row for row in season.figures.standings}
        owed = {member: row.dues_owed for member, row in standing.items() if row.dues_owed}
        assert owed == UNPAID
        still_open = {member: row.open_cases for member, row in standing.items() if row.open_cases}
        # Household 17 waits for the end of its suspension, and for the assembly.
        assert still_open == {17: 2, 29: 1, 39: 1}
        for clause, subject, first in (("4.1", 39, "2026-04-27"), ("5.1", 29, "2026-04-29")):
            case = _case(season, clause, subject, first)
            assert case.so_far.state == "final"
            assert case.so_far.amount_minor == UNPAID[subject]

    def test_one_is_paid_in_coin_before_its_day(self, season: PlayedSeason) -> None:
        case = _case(season, "4.2", 34, "2026-05-14")
        assert _charged(season, case) == {date(2026, 7, 2): 8_500}
        assert _paid(season, 34) == {date(2026, 7, 6): 8_500}
        assert _walk(case)[-1] == ("2026-07-06", "complete", SECRETARY)


def _charged(season: PlayedSeason, case: CaseRecord) -> dict[date, int]:
    rows = journal.rows(commons_id=season.commons_id, kinds=("due_charged",))
    return {row.day: row.facts["amount"] for row in rows if row.facts["case"] == case.number}


def _paid(season: PlayedSeason, member: int) -> dict[date, int]:
    rows = journal.rows(commons_id=season.commons_id, kinds=("due_paid",))
    return {row.day: row.facts["amount"] for row in rows if row.subject == member}


def _outcomes(row: CaseStepRow) -> tuple[int, int, int, int, int]:
    return row.opened, row.set_aside, row.upheld, row.overturned, row.undecided
