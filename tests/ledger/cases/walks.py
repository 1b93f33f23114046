"""Cases walked through the procedure: who does what, and on which day."""

from datetime import date, timedelta

from django.db import transaction

from ledger.cases import operations, queries
from ledger.cases.operations import Act
from tests.ledger import builders, scene
from tests.ledger.builders import line

OFFICER, OTHER_OFFICER = builders.BOARD
SECRETARY = builders.SECRETARY


def check(*, officer: int = OFFICER) -> Act:
    return Act(move="check", role="secretary", member=SECRETARY, officer=officer)


def tell(on: date, *, proved: bool = True, means: str = "by hand") -> Act:
    handed = scene.handed(on, proved=proved, means=means)
    return Act(move="tell", role="secretary", member=SECRETARY, handed=handed)


def attempt(on: date, *, means: str) -> Act:
    handed = scene.handed(on, proved=False, means=means)
    return Act(move="attempt", role="secretary", member=SECRETARY, handed=handed)


def answer(*, member: int = 5) -> Act:
    return Act(move="answer", role="member", member=member, reason="The scales were wet.")


def decide(*, member: int = OFFICER, role: str = "board") -> Act:
    return Act(
        move="decide",
        role=role,
        member=None if role == "assembly" else member,
        reason="More was landed than agreed.",
    )


def set_aside(*, member: int = OFFICER) -> Act:
    return Act(move="set_aside", role="board", member=member, reason="misread: one digit.")


def reasons(on: date) -> Act:
    return Act(move="open_appeal", role="book", handed=scene.handed(on))


def appeal(*, member: int = 5) -> Act:
    return Act(move="lodge_appeal", role="member", member=member, reason="I was at sea.")


def judged_on_appeal(*, upheld: bool) -> Act:
    move = "uphold" if upheld else "overturn"
    return Act(move=move, role="assembly", reason="The assembly has heard both sides.")


def complete() -> Act:
    return Act(move="complete", role="secretary", member=SECRETARY)


def noted(
    bay: scene.Scene, day: date, *, kilograms: str = "43", member: int = 5, name: str = ""
) -> int:
    """Land too many clams on a day, judge it and hear of it; return the new case's number."""
    bay.morning(day, hour=18)
    bay.lands(name or f"clams {day}", line("clams", kilograms), member=member, day=day)
    bay.judges(day)
    bay.hears()
    return len(queries.cases(commons_id=bay.commons_id))


def told(bay: scene.Scene, case: int, day: date) -> None:
    """Check a case and tell of it, with proof, on a day."""
    bay.morning(day)
    bay.act(case, check())
    bay.act(case, tell(day))


def decided(bay: scene.Scene, case: int, day: date, *, member: int = 5) -> None:
    """Let a told case be answered and decided on a day."""
    bay.morning(day)
    bay.act(case, answer(member=member))
    bay.act(case, decide())


def appeal_opened(bay: scene.Scene, case: int, day: date, *, member: int = 5) -> None:
    """Let a told case be answered and decided, and its reasons be delivered, on a day."""
    decided(bay, case, day, member=member)
    bay.act(case, reasons(day))


def final(bay: scene.Scene, case: int, told_on: date, *, member: int = 5) -> date:
    """Walk a noted case to its finality without appeal; return the day it became final.

    It is answered, decided and explained on the day after it was told; the 21 days to appeal begin
    then, and the deadline is rung as the day after the last begins.
    """
    told(bay, case, told_on)
    day = told_on + timedelta(days=1)
    appeal_opened(bay, case, day, member=member)
    last = day + timedelta(days=22)
    bay.midnight(last)
    with transaction.atomic():
        operations.ring(commons_id=bay.commons_id, case=case, hand=bay.hand)
    assert bay.case(case).so_far.final_on == last
    return last
