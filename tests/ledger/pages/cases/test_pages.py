"""A case at its page: read as a notice, and moved by those whose moves they are."""

import re
from datetime import date, timedelta
from typing import Any

import pytest
from django.test import Client

from ledger.cases import queries as cases
from tests.ledger import builders, scene
from tests.ledger.book_text import book_text
from tests.ledger.pages.conftest import At

DAY = date(2026, 3, 2)
CASE = "/c/reed-bank/cases/1/"


@pytest.fixture
def noted(bay: scene.Scene) -> scene.Scene:
    """Household 5 landed 60 kg of clams in a day, was judged, and a case was noted."""
    bay.morning(DAY, hour=20)
    bay.lands("A", builders.line("clams", "60"), member=5, day=DAY)
    bay.judges(date(2026, 3, 3))
    bay.hears()
    return bay


def _state(bay: scene.Scene) -> str:
    return str(cases.case(commons_id=bay.commons_id, number=1).so_far.state)


def _move(client: Client, bay: scene.Scene, move: str, role: str, **typed: Any) -> Any:
    seen = len(cases.case(commons_id=bay.commons_id, number=1).events)
    return client.post(f"{CASE}moves/", {"seen": seen, "move": move, "role": role, **typed})


def test_a_case_is_not_there_for_those_it_does_not_concern(noted: scene.Scene, at: At) -> None:
    """A neighbour and a monitor see none; those it concerns and the keepers do."""
    for member, status in ((5, 200), (7, 404), (builders.MONITOR, 404), (4, 200), (1, 200)):
        assert at(member).get(CASE).status_code == status
        listed = at(member).get("/c/reed-bank/cases/").content.decode()
        assert ("Case 1" in listed) is (status == 200)
    assert at(4).get("/c/reed-bank/cases/99/").status_code == 404


def test_a_case_reads_as_a_notice(noted: scene.Scene, at: At) -> None:
    """What was found, by which rule, what may follow, and the member's rights."""
    page = at(5).get(CASE).content.decode()
    for words in ("It concerns member", "Clause", "right to be heard", "law of the place"):
        assert words in page
    assert re.search(r"/c/reed-bank/entries/\d+/", page)


def test_a_case_goes_to_its_end_by_the_right_hands(noted: scene.Scene, at: At) -> None:
    """Checked, told, answered, decided, appealed and upheld, each by a form that was offered."""
    secretary, board, member = at(4), at(1), at(5)
    today = noted.clock.now.date()
    steps: list[tuple[Client, str, str, dict[str, Any], str]] = [
        (secretary, "check", "secretary", {"officer": 3}, "checking"),
        (secretary, "tell", "secretary", {"means": "by hand", "proved": "on"}, "told"),
        (member, "answer", "member", {"reason": "The scale was wet."}, "answered"),
        (board, "decide", "board", {"reason": "Over the limit."}, "decided"),
        (secretary, "open_appeal", "book", {"means": "by hand", "proved": "on"}, "appeal_open"),
        (member, "lodge_appeal", "member", {"reason": "I object."}, "under_appeal"),
        (secretary, "uphold", "assembly", {"reason": "It was so."}, "final"),
    ]
    for client, move, role, typed, state in steps:
        if "means" in typed:
            on = cases.case(commons_id=noted.commons_id, number=1).so_far.last_on
            typed = typed | {"on": max(on, today).isoformat()}
        assert f'value="{move}"' in client.get(CASE).content.decode(), move
        answer = _move(client, noted, move, role, **typed)
        assert answer.status_code == 302, re.findall(
            r'class="error".*?</div>', answer.content.decode(), re.S
        )
        assert _state(noted) == state
    said = secretary.get(CASE).content.decode()
    assert "Recorded by entry" in said


def test_nobody_acts_in_anothers_place(noted: scene.Scene, at: At) -> None:
    """The secretary does not decide, and the member does not check."""
    for client, move, role in (
        (at(4), "decide", "board"),
        (at(5), "check", "secretary"),
        (at(1), "check", "secretary"),
        (at(4), "return_to_checking", "book"),
    ):
        assert _move(client, noted, move, role, officer=3, reason="x").status_code in (404, 409)
        assert _state(noted) == "noted"


def test_the_secretary_writes_down_what_a_member_says(noted: scene.Scene, at: At) -> None:
    """Naming who said it; not in the name of somebody whom it does not concern."""
    secretary = at(4)
    _move(secretary, noted, "check", "secretary", officer=3)
    on = cases.case(commons_id=noted.commons_id, number=1).so_far.last_on.isoformat()
    _move(secretary, noted, "tell", "secretary", on=on, means="by hand", proved="on")
    words = {"reason": "Spoken at the pier."}
    assert _move(secretary, noted, "answer", "member", member=7, **words).status_code == 403
    assert _move(secretary, noted, "answer", "member", member=5, **words).status_code == 302
    last = cases.case(commons_id=noted.commons_id, number=1).events[-1]
    assert (last.actor.member, last.reason) == (5, "Spoken at the pier.")


def test_what_was_typed_is_kept_where_a_move_is_refused(noted: scene.Scene, at: At) -> None:
    """An officer with a part in it is refused in words; an old page is told so."""
    secretary = at(4)
    refused = _move(secretary, noted, "check", "secretary", officer=5)
    assert refused.status_code == 409
    assert 'value="5"' in refused.content.decode()
    bare = _move(secretary, noted, "check", "secretary")
    assert bare.status_code == 400
    old = {"seen": 0, "move": "check", "role": "secretary", "officer": 3}
    stale = secretary.post(f"{CASE}moves/", old)
    assert stale.status_code == 409
    assert "Somebody moved this case" in stale.content.decode()
    assert _state(noted) == "noted"


def _told(noted: scene.Scene, at: At, *, proved: bool = True) -> Client:
    """Bring the case to the notice, handed over today; return the secretary's browser."""
    secretary = at(4)
    _move(secretary, noted, "check", "secretary", officer=3)
    on = cases.case(commons_id=noted.commons_id, number=1).so_far.last_on.isoformat()
    arrived = {"proved": "on"} if proved else {}
    _move(secretary, noted, "tell", "secretary", on=on, means="by hand", **arrived)
    return secretary


def test_a_printed_notice_says_what_may_follow_and_how_long_to_answer(
    noted: scene.Scene, at: At
) -> None:
    """Before it is handed over: the ladder's first step, and the book's seven days."""
    page = at(4).get(CASE).content.decode()
    assert "At most a written warning" in page
    assert "has 7 days to answer" in page
    assert "Those who may decide" in page


def test_the_last_day_is_of_the_edition_that_moves_are_judged_by(
    noted: scene.Scene, at: At
) -> None:
    """A later edition that gives ten days for seven moves the day that the page names."""
    _told(noted, at)
    so_far = cases.case(commons_id=noted.commons_id, number=1).so_far
    assert so_far.told_on is not None
    longer = book_text(edition=2, first=date(2026, 3, 9)).replace(
        "answer_to_warning: 7 d", "answer_to_warning: 10 d"
    )
    scene.adopts(noted, longer)
    until = so_far.told_on + timedelta(days=10)
    assert f"<strong>{until.isoformat()}</strong>" in at(5).get(CASE).content.decode()


def test_days_that_do_not_run_are_not_named(noted: scene.Scene, at: At) -> None:
    """Not while the delivery is unproved, and not when the answer is in."""
    _told(noted, at, proved=False)
    page = at(5).get(CASE).content.decode()
    assert "the days to answer do not run yet" in page
    assert "may answer until" not in page
    _move(at(5), noted, "answer", "member", reason="The scale was wet.")
    page = at(5).get(CASE).content.decode()
    assert "may answer" not in page


def test_an_overturned_case_offers_neither_a_step_nor_an_appeal(noted: scene.Scene, at: At) -> None:
    """What was decided is told as past."""
    secretary = _told(noted, at)
    _move(at(5), noted, "answer", "member", reason="The scale was wet.")
    _move(at(1), noted, "decide", "board", reason="Over the limit.")
    on = cases.case(commons_id=noted.commons_id, number=1).so_far.last_on.isoformat()
    _move(secretary, noted, "open_appeal", "book", on=on, means="by hand", proved="on")
    assert "may appeal to the assembly until" in at(5).get(CASE).content.decode()
    _move(at(5), noted, "lodge_appeal", "member", reason="I object.")
    _move(secretary, noted, "overturn", "assembly", reason="It was wet.")
    page = at(5).get(CASE).content.decode()
    assert "That was overturned and holds no more." in page
    assert not re.search("may appeal|may answer|At most", page)
    listed = at(4).get("/c/reed-bank/cases/?only=open").content.decode()
    assert "Case 1" not in listed
    assert "Case 1" in at(4).get("/c/reed-bank/cases/?only=ended").content.decode()


def test_an_answer_always_names_the_member_who_gave_it(noted: scene.Scene, at: At) -> None:
    """The secretary has one form for it, and none to answer in their own name."""
    secretary = _told(noted, at)
    page = secretary.get(CASE).content.decode()
    assert page.count('value="answer"') == 1
    assert 'value="attempt"' not in page, "the notice arrived, with proof"
    refused = _move(secretary, noted, "answer", "secretary", reason="They said so.")
    assert refused.status_code == 409
    assert _state(noted) == "told"
