"""States, moves and roles of a case as people read them."""

from ledger.cases.queries import CaseRecord

STATES = {
    "noted": "noted: something was computed, and nobody is accused",
    "checking": "being checked by its case officer",
    "set_aside": "set aside: not pursued",
    "told": "told: the days to answer run",
    "answered": "answered: the member's side is in",
    "unanswered": "not answered in time",
    "decided": "decided, and the reasons are still to be handed over",
    "appeal_open": "decided; the days to appeal run",
    "under_appeal": "under appeal: nothing takes effect before that is heard",
    "overturned": "overturned: as if it had not been decided",
    "final": "final: it takes effect",
    "done": "done",
}
NOT_ARRIVED = "told, and that the notice arrived is not proved: the days to answer do not run yet"
MOVES = {
    "note": "note it",
    "check": "have it checked by a case officer",
    "set_aside": "set it aside",
    "tell": "hand the notice over",
    "attempt": "try to hand the notice over once more",
    "answer": "answer",
    "close_silence": "close the days to answer",
    "decide": "decide",
    "open_appeal": "hand the reasons over, which opens the days to appeal",
    "lodge_appeal": "appeal",
    "uphold": "uphold the decision",
    "overturn": "overturn the decision",
    "let_stand": "let the decision stand",
    "complete": "close it as done",
    "return_to_checking": "send it back to be checked",
}
ROLES = {
    "book": "the book itself",
    "secretary": "the secretary",
    "monitor": "a monitor",
    "board": "the board",
    "assembly": "the assembly",
    "auditor": "the auditor",
    "member": "the member",
}
# Who stands behind a move that somebody else may write down.
SAID_BY = {
    "board": ", for the board",
    "assembly": ", as the assembly resolved",
    "member": ", as the member says",
}


def state_in_words(case: CaseRecord) -> str:
    """Return where a case stands; a notice that did not count as delivered yet starts no days."""
    state = str(case.so_far.state)
    if state == "told" and case.so_far.told_on is None:
        return NOT_ARRIVED
    return STATES[state]
