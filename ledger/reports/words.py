"""The sentences of the report: each answers a question that a table below answers in full."""

from fractions import Fraction

from governance.advice.records import Advice
from ledger.reports import numbers
from ledger.reports.figures import ResourceFigures, SeasonFigures, digest
from ledger.reports.numbers import many


def _with_unit(resource: ResourceFigures, value: int) -> str:
    return numbers.amount_with_unit(value, base=resource.base, unit=resource.unit)


def use(resource: ResourceFigures) -> str:
    """Say what the group took of a resource, out of what."""
    taken, allowable = (_with_unit(resource, v) for v in (resource.taken, resource.allowable))
    if resource.used is None:
        return f"The group took {taken} of {resource.name}; no allowable was in force."
    return (
        f"The group took {taken} of {resource.name}, {numbers.percent(resource.used)} of the"
        f" season's allowable of {allowable}."
    )


def left(resource: ResourceFigures) -> str:
    """Say what remained of a resource's allowable and of what was carried in."""
    carried = ""
    if resource.carried_in:
        carried = f" of it and of {_with_unit(resource, resource.carried_in)} carried in"
    if resource.left < 0:
        return f"{_with_unit(resource, -resource.left)} more than that{carried} was taken."
    return f"{_with_unit(resource, resource.left)}{carried} was left on the last day."


def window(resource: ResourceFigures) -> str:
    """Say when the season was, how many slips it has, and how many members took."""
    return (
        f"The season of {resource.name} ran from {numbers.day(resource.opens)} to"
        f" {numbers.day(resource.closes)}, both included;"
        f" {many(resource.slips, one='slip', more='slips')} record it, and"
        f" {resource.members_took:,} of the"
        f" {many(resource.members_entitled, one='entitled member', more='entitled members')}"
        " took some."
    )


def findings(figures: SeasonFigures) -> str:
    """Say how many findings there are."""
    found = sum(row.found for row in figures.findings)
    if not found:
        return "No entry was found that does not fit the bylaws."
    standing = sum(row.standing for row in figures.findings)
    withdrawn = sum(row.withdrawn for row in figures.findings)
    return (
        f"The bylaws and the entries give {many(found, one='finding', more='findings')}:"
        f" {standing:,} stand and {withdrawn:,} {'was' if withdrawn == 1 else 'were'} withdrawn"
        " after later entries."
    )


def cases(figures: SeasonFigures) -> str:
    """Say how many cases were opened and how they went."""
    steps = figures.cases.steps
    opened = sum(row.opened for row in steps)
    if not opened:
        return "No case was opened."
    aside, upheld, overturned, undecided = (
        sum(values)
        for values in zip(
            *((r.set_aside, r.upheld, r.overturned, r.undecided) for r in steps), strict=True
        )
    )
    return (
        f"{many(opened, one='case was', more='cases were')} opened: {aside:,} set"
        f" aside, {upheld:,} decided and standing, {overturned:,} overturned on appeal,"
        f" {undecided:,} not decided yet."
    )


def procedure(figures: SeasonFigures) -> tuple[str, ...]:
    """Say how long the procedure took, as far as any case went."""
    told, decided = figures.cases.days_act_to_told, figures.cases.days_told_to_decided
    sentences = []
    if told is not None:
        sentences.append(
            f"Half of those concerned were told within {numbers.tenths(told)} days of the act."
        )
    if decided is not None:
        sentences.append(
            f"Half of the decisions came within {numbers.tenths(decided)} days of telling."
        )
    return tuple(sentences)


def dues(figures: SeasonFigures) -> str:
    """Say what money was charged, paid and is open."""
    if not figures.dues:
        return "No dues in money were charged."
    charged, paid, still_open = (
        f"{numbers.money(sum(values), currency=figures.currency)} {figures.currency}"
        for values in zip(*((r.charged, r.paid, r.open) for r in figures.dues), strict=True)
    )
    return f"Dues of {charged} were charged; {paid} is paid and {still_open} is open."


def duties(figures: SeasonFigures) -> str:
    """Say what work was owed, given, replaced by money and is short."""
    duty = figures.duties
    if duty is None:
        return "The book asks for no work."
    owed, rendered, replaced, short = (
        numbers.amount_with_unit(value, base=duty.base, unit=duty.unit)
        for value in (duty.owed, duty.rendered, duty.replaced, duty.short)
    )
    return (
        f"Of {owed} of work owed, {rendered} was given and {replaced} replaced by money;"
        f" {many(duty.members_short, one='member is', more='members are')} short by {short} in all."
    )


def reporting(figures: SeasonFigures) -> str:
    """Say how soon slips were reported."""
    delays = figures.reporting
    if not delays.slips:
        return "No slip was reported."
    soon = Fraction(delays.within_24 + delays.within_48, delays.slips)
    return (
        f"{numbers.percent(soon)} of {many(delays.slips, one='slip', more='slips')} were reported"
        f" within 48 hours of the landing; {delays.later:,} came later."
    )


def inspections(figures: SeasonFigures) -> str:
    """Say how many slips were checked."""
    slips, checked, differences = (
        sum(getattr(row, field) for row in figures.inspections)
        for field in ("slips", "checked", "differences")
    )
    if not checked:
        return "The monitors checked no slip."
    return (
        f"The monitors checked {checked:,} of {many(slips, one='slip', more='slips')},"
        f" {numbers.percent(Fraction(checked, slips))}, and found"
        f" {many(differences, one='difference', more='differences')}."
    )


def orders(figures: SeasonFigures) -> str:
    """Say how many outside orders the season had."""
    orders_count = many(len(figures.orders), one="order", more="orders")
    return f"The season had {orders_count} from outside authorities."


def advice(figures: SeasonFigures, row: Advice) -> str:
    """Say what is proposed, how it compares with the present, and at what risk."""
    resource = figures.resource(row.resource)
    proposed, present = (_with_unit(resource, value) for value in (row.proposed, row.present))
    change = row.proposed - row.present
    if not change or not row.present:
        step = "as now" if not change else f"from {present} now"
    else:
        direction = "more" if change > 0 else "less"
        step = f"{numbers.percent(Fraction(abs(change), row.present))} {direction} than {present}"
    return (
        f"For {row.season} the advice proposes an allowable of {proposed} of {resource.name},"
        f" {step}.{_risk_of_proposal(row)}"
    )


def _risk_of_proposal(row: Advice) -> str:
    if row.survey_risk is not None:
        tried_rates = [one for one in row.survey_risk.rows if one.candidate == row.proposed]
        return "".join(
            f" The chance that this is more than {row.survey_risk.rate} of what really stands is"
            f" {numbers.chance(one.chance_above)}."
            for one in tried_rates
        )
    if row.risk is None:
        return ""
    tried = [one for one in row.risk.rows if one.candidate == row.proposed]
    if not tried:
        return ""
    return (
        f" Taken every year whatever comes, the chance of falling below {row.risk.limit_words}"
        f" within {row.risk.horizon_years} years is {numbers.chance(tried[0].chance_below)}; set"
        f" anew each year by the rule, it is {numbers.chance(row.risk.under_rule)}."
    )


def method(row: Advice) -> tuple[str, ...]:
    """Say how the advice was made."""
    runs = "It uses no chance."
    if row.runs is not None:
        runs = f"It uses {row.runs:,} runs from the seed {row.seed}."
    return (
        f"Clause {row.clause} asks for it. {row.method}",
        f"Model: {row.model} Data: {row.data_first_year} to {row.data_last_year}."
        f" Made on {numbers.day(row.made_on)}. {runs}",
        f"Rule: {row.rule}",
    )


def stock(row: Advice, *, resource: ResourceFigures) -> str:
    """Say where the stock stands between the last estimated year and the last projected one."""
    assert row.stock is not None
    bands = row.stock.bands
    if not bands:
        return f"The stock of {resource.name} has no estimated year."
    past = [band for band in bands if band.year < row.stock.first_projected]
    now, last = (past or bands)[-1], bands[-1]

    def rough(value: int) -> str:
        return numbers.rough_amount(value, base=resource.base, unit=resource.unit)

    sentence = (
        f"The stock of {resource.name} is estimated at {rough(now.median)} in {now.year}; 95 of 100"
        f" runs lie between {rough(now.low_95)} and {rough(now.high_95)}."
    )
    if last is now:
        return sentence
    return (
        f"{sentence} Under the advice the median in {last.year} is {rough(last.median)}, between"
        f" {rough(last.low_95)} and {rough(last.high_95)}."
    )


def next_season(figures: SeasonFigures) -> tuple[str, ...]:
    """Say what is adopted for the next season."""
    sentences = []
    for row in figures.next_season:
        resource = figures.resource(row.resource)
        sentences.append(
            f"The {row.adopted_by} adopted {_with_unit(resource, row.allowable)} of {resource.name}"
            f" on {numbers.day(row.adopted_on)}, for {numbers.day(row.opens)} to"
            f" {numbers.day(row.closes)};"
            f" {many(row.holders, one='member holds', more='members hold')} an allotment."
        )
    return tuple(sentences) or ("No allowable of the next season is adopted yet.",)


def settlement(figures: SeasonFigures) -> tuple[str, ...]:
    """Say how each resource was settled."""
    return tuple(
        f"Of {resource.name}, {_with_unit(resource, resource.settlement.carried)} is carried to the"
        f" next season, {_with_unit(resource, resource.settlement.unclaimed)} went back to the"
        f" pool, and {_with_unit(resource, resource.settlement.owed)} comes off the next allotments"
        " of those who took too much."
        for resource in figures.resources
    )


def edition(figures: SeasonFigures) -> str:
    """Say which edition of the book the season was judged under."""
    book = figures.edition
    return (
        f"Edition {book.number}, in force from {numbers.day(book.in_force_from)}; adopted by the"
        f" {book.adopted_by} on {numbers.day(book.adopted_on)} with {book.votes_for:,} for,"
        f" {book.votes_against:,} against, {book.votes_abstained:,} abstained"
    )


def recompute(figures: SeasonFigures) -> tuple[str, ...]:
    """Say how anybody may check the report."""
    return (
        "Every figure of this report comes from the journal's entries that the proof line names,"
        " and from nothing else.",
        "Run “python manage.py verify” on the book: it recounts the balances from the entries,"
        " rebuilds the tree of hashes, and prints the head. The first digits are those in the proof"
        " line, as long as no later entry was made.",
        "Make the report again at the same head: the digest of its figures must be"
        f" {numbers.short_digest(digest(figures))} (SHA-256: {digest(figures)}). The moment of"
        " making is not part of it.",
        "The advice is repeated by its seed and its number of runs, stated beside it.",
        "The page, the PDF and the workbook show the same figures; the workbook has them as"
        " numbers, so that anybody can add them up.",
    )
