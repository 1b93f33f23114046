"""A clause as one plain sentence, to be read or read aloud.

The sentence is made of the same record that the judge reads, so a member can hold it against the
text that the assembly adopted.
"""

from typing import assert_never

from governance.bylaws import clauses, words

_ROUNDING = {
    clauses.Apportionment.LARGEST_REMAINDER: "by largest remainder",
    clauses.Apportionment.WEBSTER: "by Webster's divisors",
    clauses.Apportionment.JEFFERSON: "by Jefferson's divisors",
}
_GROWTH = {
    clauses.Growth.SCHAEFER: "a Schaefer model of the stock",
    clauses.Growth.PELLA_TOMLINSON: "a Pella–Tomlinson model of the stock",
}
_SEQUENCE = {
    clauses.Sequence.TAKE_THEN_GROW: "a season's take coming before its growth",
    clauses.Sequence.GROW_THEN_TAKE: "a season's growth coming before its take",
}
_READING = {
    clauses.FortyTenReading.STRAIGHT_LINE_IN_CATCH: "an allowable",
    clauses.FortyTenReading.RAMP_IN_FRACTION: "a fraction",
}


def sentence(*, clause: clauses.Clause, book: clauses.Book) -> str:
    """Return what a clause says, in one sentence.

    :param book: the book that holds the clause and the ladder that it names.
    """
    return _said(clause) + _otherwise(clause.head, book) + "."


def step_words(step: clauses.Step) -> str:
    """Return what a step of a ladder does: ``a suspension of 14 days``."""
    match step:
        case clauses.Warning():
            return "a written warning"
        case clauses.Fine():
            return _fine(step)
        case clauses.Suspension():
            return f"a suspension of {words.count(step.days, 'd')}"
        case clauses.Referral():
            return f"referral to the {words.name(step.body)}"
        case _:
            assert_never(step)


def _said(clause: clauses.Clause) -> str:
    match clause:
        case clauses.Membership():
            return f"A member is {_either(clause.classes)}"
        case clauses.Allocation():
            return _allocation(clause)
        case clauses.QuantityLimit():
            return _quantity_limit(clause)
        case clauses.ClosedWindow():
            return _closed_window(clause)
        case clauses.OutsideOrder():
            return (
                f"{_member(clause.head)} must not take {words.name(clause.resource)} from a zone"
                " while an outside authority's order closes it"
            )
        case clauses.ReportingDuty():
            within = words.count(clause.within_hours, "h")
            return f"{_member(clause.head)} must hand in the slip within {within} of a take"
        case clauses.WorkDuty():
            return _work_duty(clause)
        case clauses.CarryOver():
            return (
                f"{_member(clause.head)} may carry over what is left of the allotment of"
                f" {words.name(clause.resource)} into the next season,"
                f" at most {words.percent(clause.at_most)} of the allotment"
            )
        case clauses.Payback():
            return _payback(clause)
        case clauses.SanctionLadder():
            return _ladder(clause)
        case clauses.Procedure():
            return _procedure(clause)
        case clauses.PoolTotal():
            return _pool_total(clause)
        case _:
            assert_never(clause)


def _otherwise(head: clauses.Head, book: clauses.Book) -> str:
    if head.or_else is None:
        return ""
    return f"; otherwise the ladder “{book.clause(head.or_else).head.title}” applies"


def _either(names: tuple[str, ...]) -> str:
    return words.listed([words.name(each) for each in names], joined_by="or")


def _member(head: clauses.Head) -> str:
    """Return the subject of a sentence about one member."""
    if head.who is None:
        return "A member"
    kind = words.name(head.who)
    return f"{'An' if kind[0] in 'aeiou' else 'A'} {kind} member"


def _members(head: clauses.Head) -> str:
    return "members" if head.who is None else f"{words.name(head.who)} members"


def _allocation(clause: clauses.Allocation) -> str:
    match clause.basis:
        case clauses.Basis.SHARES:
            how = "by their shares"
        case clauses.Basis.EQUAL:
            how = "in equal parts"
        case _:
            assert_never(clause.basis)
    kept = words.percent(clause.reserve) if clause.reserve else "nothing"
    return (
        f"The season's allowable of {words.name(clause.resource)} is split among"
        f" {_members(clause.head)} {how}, with {kept} kept in the pool, parts rounded"
        f" {_ROUNDING[clause.rounding]} and ties going to the lower member number"
    )


def _quantity_limit(clause: clauses.QuantityLimit) -> str:
    match clause.counted_by:
        case clauses.CountedBy.MEMBER:
            who, whose = _member(clause.head), "the member's allotment"
        case clauses.CountedBy.HOUSEHOLD:
            who = f"The {_members(clause.head)} of a household together"
            whose = "their allotments"
        case _:
            assert_never(clause.counted_by)
    limit = whose if clause.more_than is None else words.amount(clause.more_than)
    beyond = (
        f"though up to {words.percent(clause.tolerance)} beyond that is tolerated"
        if clause.tolerance
        else "and nothing beyond that is tolerated"
    )
    resource = words.name(clause.resource)
    return f"{who} must not take more {resource} {words.span(clause.per)} than {limit}, {beyond}"


def _closed_window(clause: clauses.ClosedWindow) -> str:
    where = f"in {_either(clause.zones)}" if clause.zones else "anywhere"
    first, last = words.day_of_year(clause.closed.first), words.day_of_year(clause.closed.last)
    return (
        f"{_member(clause.head)} must not take {words.name(clause.resource)} {where}"
        f" from {first} to {last} of any year, both days included"
    )


def _work_duty(clause: clauses.WorkDuty) -> str:
    days = words.count(clause.days, "d")
    day = f"{words.hours(clause.day_minutes)} to the day"
    instead = (
        "which cannot be paid off"
        if clause.instead is None
        else f"or pay {words.money(clause.instead.money)} for each day not worked"
    )
    return f"{_member(clause.head)} must give {days} of work in each season, {day}, {instead}"


def _payback(clause: clauses.Payback) -> str:
    factor = "" if clause.factor == 1 else f" {words.number(clause.factor)} times over"
    return (
        f"What {_member(clause.head).lower()} takes beyond the allotment of"
        f" {words.name(clause.resource)} comes off the next one{factor}"
    )


def _fine(step: clauses.Fine) -> str:
    if step.flat is not None:
        return f"a fine of {words.money(step.flat)}"
    assert step.per_excess is not None, "a fine is flat or by the unit"
    price = f"{words.money(step.per_excess.money)} for {words.each(step.per_excess.per)}"
    most = "" if step.at_most is None else f" but no more than {words.money(step.at_most)}"
    return f"a fine of {price} of the breach{most}"


def _ladder(clause: clauses.SanctionLadder) -> str:
    steps = ", then ".join(step_words(step) for step in clause.steps)
    restored = "; what was taken in excess is given back at every step" if clause.restore else ""
    return (
        f"An act that breaks a clause is answered with {steps}, one step further for each earlier"
        f" act within the {words.count(clause.window_days, 'd')} before it{restored}"
    )


def _procedure(clause: clauses.Procedure) -> str:
    return (
        f"A member has {words.count(clause.answer_days, 'd')} to answer before anything is decided,"
        f" or {words.count(clause.answer_to_warning_days, 'd')} where no more than a warning is"
        f" meant, and {words.count(clause.appeal_days, 'd')} to appeal to the"
        f" {words.name(clause.appeal_to)}"
    )


def _pool_total(clause: clauses.PoolTotal) -> str:
    approvals = "1 approval" if clause.approvals == 1 else f"{clause.approvals} approvals"
    parts = [
        f"The next season's allowable of {words.name(clause.resource)} is advised"
        f" {words.count(clause.review_days, 'd')} before the season {_method(clause.method)}",
        *_change(clause),
        *_risk(clause.risk),
        f"the {words.name(clause.confirm_by)} confirms it with {approvals}",
    ]
    return "; ".join(parts)


def _method(method: clauses.ByGrowthModel | clauses.BySurvey) -> str:
    match method:
        case clauses.BySurvey():
            rate = words.percent(method.rate)
            return f"as {rate} of what the survey found on the zones that may open"
        case clauses.ByGrowthModel():
            shape = "" if method.shape is None else f" of shape {words.number(method.shape)}"
            return (
                f"from {_GROWTH[method.growth]}{shape}, {_SEQUENCE[method.sequence]}:"
                f" {_rule(method.rule)}"
            )
        case _:
            assert_never(method)


def _rule(rule: clauses.Rule) -> str:
    match rule:
        case clauses.HockeyStick():
            return _ramp(rule.limit, rule.trigger, rule.fraction, "a fraction")
        case clauses.FortyTen():
            return _ramp(rule.lower, rule.upper, rule.fraction, _READING[rule.reading])
        case clauses.ConstantEscapement():
            return f"all that stands above {words.level(rule.leave)}"
        case _:
            assert_never(rule)


def _ramp(
    low: clauses.Reference, high: clauses.Reference, full: clauses.Reference, rising: str
) -> str:
    return (
        f"nothing at or below {words.level(low)}, {words.level(full)} from {words.level(high)}"
        f" upwards, and between the two {rising} that rises in a straight line"
    )


def _change(clause: clauses.PoolTotal) -> list[str]:
    moves = [
        f"{verb} by at most {words.percent(part)}"
        for verb, part in (("rises", clause.up_at_most), ("falls", clause.down_at_most))
        if part is not None
    ]
    if not moves:
        return []
    below = clause.unless_below
    unless = "" if below is None else f" unless the stock is below {words.level(below)}"
    return [f"it {' and '.join(moves)} from season to season{unless}"]


def _risk(risk: clauses.Risk | None) -> list[str]:
    if risk is None:
        return []
    return [
        f"the chance that the stock lies below {words.level(risk.below)} in any season is at most"
        f" {words.percent(risk.at_most)}"
    ]
