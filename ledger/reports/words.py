"""The sentences of the report: each answers a question that a table below answers in full."""

from fractions import Fraction

from ledger.reports import numbers
from ledger.reports.figures import (
    INSTEAD_OF_WORK,
    MoneyDueRow,
    NextSeasonRow,
    ResourceFigures,
    SeasonFigures,
    digest,
)
from ledger.reports.numbers import many


def _with_unit(resource: ResourceFigures, value: int) -> str:
    return numbers.whole_amount(value, base=resource.base, unit=resource.unit)


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
    """Say how many findings there are, and that they accuse nobody."""
    found = sum(row.found for row in figures.findings)
    if not found:
        return "No entry was found that does not fit the bylaws."
    withdrawn = sum(row.withdrawn for row in figures.findings)
    later = ""
    if withdrawn:
        later = f"; {numbers.was(withdrawn)} withdrawn after a later entry, such as a correction"
    return (
        f"{many(found, one='finding was', more='findings were')} computed{later}. A finding says"
        " that entries and a clause do not fit together, not that anybody is guilty."
    )


def tolerance(figures: SeasonFigures) -> tuple[str, ...]:
    """Say where a finding begins and what is given back, if there is any finding."""
    if not figures.findings:
        return ()
    return (
        "A finding begins beyond the tolerance of its clause, where it has one; the breach is what"
        " lies beyond that. What is given back is all that lies beyond the bare limit: it is taken"
        " off the member's allotment and left to all, and no catch goes back.",
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
    parts = (
        (aside, "set aside"),
        (upheld, "decided and stand" if upheld != 1 else "decided and stands"),
        (overturned, "overturned on appeal"),
        (undecided, "not decided yet"),
    )
    said = "; ".join(f"{numbers.was(count)} {words}" for count, words in parts if count)
    return f"Of {many(opened, one='case', more='cases')}, {said}."


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
    """Say what money was charged, paid and is open, and apart from that what came for work."""
    fines = [row for row in figures.dues if row.kind != INSTEAD_OF_WORK]
    instead = [row for row in figures.dues if row.kind == INSTEAD_OF_WORK]
    sentences = []
    if fines:
        charged, paid, still_open = (
            _money(figures, sum(values))
            for values in zip(*((row.charged, row.paid, row.open) for row in fines), strict=True)
        )
        kinds = " and ".join(dict.fromkeys(_kind(row) for row in fines))
        sentences.append(
            f"{kinds} of {charged} were charged; {paid} is paid and {still_open} is open."
        )
    else:
        sentences.append("No dues in money were charged.")
    if instead:
        count = many(sum(row.count for row in instead), one="payment", more="payments")
        paid = _money(figures, sum(row.paid for row in instead))
        sentences.append(f"Apart from that, {count} of {paid} came in place of work.")
    return " ".join(sentences)


def _kind(row: MoneyDueRow) -> str:
    return {"fine": "Fines"}.get(row.kind, f"Dues ({row.kind})")


def _money(figures: SeasonFigures, minor: int) -> str:
    return f"{numbers.money(minor, currency=figures.currency)} {figures.currency}"


def duties(figures: SeasonFigures) -> str:
    """Say what work was owed, given, replaced by money and is short."""
    duty = figures.duties
    if duty is None:
        return "The book asks for no work."
    owed, rendered, replaced, short, beyond = (
        numbers.amount_with_unit(value, base=duty.base, unit=duty.unit)
        for value in (duty.owed, duty.rendered, duty.replaced, duty.short, duty.beyond)
    )
    more = f" Some gave more than they owed: {beyond} in all." if duty.beyond else ""
    if not duty.members_short:
        ending = "nobody is short."
    else:
        members = many(duty.members_short, one="member is", more="members are")
        ending = f"{members} short by {short} in all."
    return (
        f"{owed} of work was owed; {rendered} was given and {replaced} replaced by money;"
        f" {ending}{more}"
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


def next_season(figures: SeasonFigures) -> tuple[str, ...]:
    """Say what is adopted for the next season, and what members may take of it."""
    sentences = tuple(_next(figures, row) for row in figures.next_season)
    return sentences or ("No allowable of the next season is adopted yet.",)


def _next(figures: SeasonFigures, row: NextSeasonRow) -> str:
    resource = figures.resource(row.resource)
    adopted, reserve, allotted, carried, off, may_take = (
        _with_unit(resource, value)
        for value in (
            *(row.allowable, row.reserve, row.allotted, row.carried_in),
            *(row.owed + row.given_back, row.may_take),
        )
    )
    split = f"{allotted} is allotted and {reserve} kept in reserve"
    if not row.reserve:
        split = "all of it is allotted"
    moved = [f"{carried} carried in"] if row.carried_in else []
    if row.owed + row.given_back:
        moved.append(f"{off} coming off for what was taken beyond a measure")
    counting = f"With {' and '.join(moved)}, " if moved else ""
    who = many(len(row.shares), one="member", more="members")
    spread = ""
    if row.shares:
        least, most = (_with_unit(resource, value) for value in (row.shares[0], row.shares[-1]))
        spread = f", from {least} to {most} each"
    may = numbers.sentence_case(f"{counting}{who} may take {may_take} in all{spread}.")
    return (
        f"The {row.adopted_by} adopted {adopted} of {resource.name} on"
        f" {numbers.day(row.adopted_on)} for {numbers.day(row.opens)} to"
        f" {numbers.day(row.closes)}: {split}. {may}"
    )


def settlement(figures: SeasonFigures) -> tuple[str, ...]:
    """Say how each resource was settled."""
    return tuple(_settled(resource) for resource in figures.resources)


def _settled(resource: ResourceFigures) -> str:
    settled = resource.settlement
    parts = (
        (resource.reserve, "was kept in reserve"),
        (settled.given_back, "was given back in the season, off members' allotments"),
        (settled.carried, "is carried to the next season"),
        (settled.unclaimed, "went back to the pool unclaimed"),
    )
    said = ", ".join(f"{_with_unit(resource, value)} {words}" for value, words in parts if value)
    owed = (
        f" {_with_unit(resource, settled.owed)} was taken beyond what members had, and comes off"
        " their next allotments."
        if settled.owed
        else ""
    )
    return (
        f"Of {resource.name}, {_with_unit(resource, resource.left)} was left:"
        f" {said or 'nothing to settle'}.{owed}"
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
    first = numbers.day(figures.first)
    return (
        "Every figure of this report comes from the journal's entries that the proof line names,"
        " and from nothing else.",
        "Run “.venv/bin/python manage.py verify” on the book: it recounts the balances from the"
        " entries, rebuilds the tree of hashes, and prints the head. The first digits are those in"
        " the proof line, as long as no later entry was made.",
        f"Run “.venv/bin/python manage.py report --commons SLUG --season {first}”, with the short"
        " name of the commons for SLUG: it makes the report again, and prints the proof line and"
        " the digest of the figures. The report must be made at the same head, before any later"
        " entry; the moment of making is not part of the digest.",
        f"The digest must be {numbers.short_digest(digest(figures))} (SHA-256: {digest(figures)}).",
        "The advice is repeated by its seed and its number of runs, stated beside it.",
        "The page, the PDF and the workbook show the same figures; the workbook has them as"
        " numbers, so that anybody can add them up.",
    )
