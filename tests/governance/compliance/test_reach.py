from governance import facts
from governance.compliance import reach
from tests.governance.compliance import scenes

ROSTER = facts.Roster(
    members=(
        scenes.member(6),
        scenes.member(7),
        scenes.member(43, household=6),
        scenes.member(44, household=6),
    )
)


def test_a_fact_on_one_member_touches_the_household():
    assert reach.touched(roster=ROSTER, members=frozenset({43})) == {6, 43, 44}


def test_a_member_alone_touches_nobody_else():
    assert reach.touched(roster=ROSTER, members=frozenset({7})) == {7}


def test_nobody_and_unknown_members_touch_nobody():
    assert reach.touched(roster=ROSTER, members=frozenset()) == frozenset()
    assert reach.touched(roster=ROSTER, members=frozenset({99})) == frozenset()
