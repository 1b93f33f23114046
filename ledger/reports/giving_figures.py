"""Figures of what members gave and owe, and where each stands."""

from collections import Counter
from collections.abc import Mapping

from governance.bylaws import clauses
from ledger.cases import queries as cases
from ledger.commons import queries as commons
from ledger.journal import queries as journal
from ledger.movements import queries as movements
from ledger.reports import figures
from ledger.reports.reported import Reported
from ledger.reports.use_figures import allotted_in, carried_into
from ledger.seasons import queries as seasons


def dues(reported: Reported) -> tuple[figures.MoneyDueRow, ...]:
    """Return the dues in money by kind, as they stand when the report is made."""
    rows = []
    for kind in movements.DUE_KINDS:
        standing = movements.dues(commons_id=reported.commons_id, kind=kind).values()
        charged = journal.rows(commons_id=reported.commons_id, kinds=(movements.DUE_CHARGED,))
        rows.append(
            figures.MoneyDueRow(
                kind=kind,
                count=sum(1 for row in charged if row.facts["due"] == kind),
                charged=sum(due.charged for due in standing),
                paid=sum(due.paid for due in standing),
                open=sum(due.owed for due in standing),
            )
        )
    instead = movements.rows(
        commons_id=reported.commons_id,
        kinds=(movements.MONEY_INSTEAD,),
        during=reported.during,
    )
    paid = sum(row.facts["amount"] for row in instead)
    rows.append(
        figures.MoneyDueRow(
            kind=figures.INSTEAD_OF_WORK, count=len(instead), charged=paid, paid=paid, open=0
        )
    )
    return tuple(row for row in rows if row.count)


def restitution(reported: Reported) -> tuple[figures.RestitutionRow, ...]:
    """Return what was taken off allotments in the resource itself."""
    season_of = {season.code: season.resource for season in reported.seasons}
    given: Counter[str] = Counter()
    count: Counter[str] = Counter()
    for row in journal.rows(commons_id=reported.commons_id, kinds=(movements.GIVEN_BACK,)):
        resource = season_of.get(row.facts["season"])
        if resource is not None:
            given[resource] += row.facts["amount"]
            count[resource] += 1
    return tuple(
        figures.RestitutionRow(
            resource=resource,
            count=count[resource],
            amount=given[resource],
        )
        for resource in sorted(given)
    )


def duties(reported: Reported) -> figures.DutyFigures | None:
    """Return the duties of work over all members, or None where the book lays none on them."""
    by_member = _duties_by_member(reported)
    if not by_member:
        return None
    return figures.DutyFigures(
        base="min",
        unit="h",
        owed=sum(each.assessed for each in by_member.values()),
        rendered=sum(each.worked for each in by_member.values()),
        replaced=sum(each.paid_instead for each in by_member.values()),
        short=sum(max(each.owed, 0) for each in by_member.values()),
        members_short=sum(1 for each in by_member.values() if each.owed > 0),
    )


def _duties_by_member(reported: Reported) -> Mapping[int, movements.DutyStanding]:
    """Return each member's duties, added up over the clauses."""
    totals: dict[int, movements.DutyStanding] = {}
    for clause in reported.book.clauses:
        if not isinstance(clause, clauses.WorkDuty):
            continue
        standing = movements.duties(
            commons_id=reported.commons_id,
            clause=clause.head.id,
            first=reported.during.first,
        )
        for member, duty in standing.items():
            totals[member] = totals[member].plus(duty) if member in totals else duty
    return totals


def standings(reported: Reported) -> tuple[figures.StandingRow, ...]:
    """Return where each member stands, by number."""
    commons_id = reported.commons_id
    roster = commons.roster(commons_id=commons_id)
    by_duty = _duties_by_member(reported)
    owed: Counter[int] = Counter()
    for kind in movements.DUE_KINDS:
        for number, due in movements.dues(commons_id=commons_id, kind=kind).items():
            owed[number] += due.owed
    # A household that counts as one shares its case: each of it has the case open.
    open_cases = Counter(
        member
        for case in cases.cases(commons_id=commons_id, is_open=True)
        for member in cases.responsible(case)
    )
    holdings = {season.code: _holdings(commons_id, season) for season in reported.seasons}
    nothing = movements.DutyStanding(assessed=0, worked=0, paid_instead=0, owed=0)
    rows = []
    for member in roster.members:
        duty = by_duty.get(member.number, nothing)
        rows.append(
            figures.StandingRow(
                member=member.number,
                household=member.household,
                member_class=", ".join(
                    held.value
                    for held in member.classes
                    if held.during.holds(reported.during.first)
                ),
                holdings=tuple(
                    of_season[member.number]
                    for of_season in holdings.values()
                    if member.number in of_season
                ),
                duty_owed=duty.assessed,
                duty_rendered=duty.worked + duty.paid_instead,
                duty_short=max(duty.owed, 0),
                dues_owed=owed[member.number],
                open_cases=open_cases[member.number],
            )
        )
    return tuple(rows)


def _holdings(
    commons_id: int, season: seasons.SeasonRecord
) -> Mapping[int, figures.HoldingFigures]:
    parts, carried = allotted_in(commons_id, season), carried_into(commons_id, season)
    taken = seasons.taken(commons_id=commons_id, season=season.code)
    return {
        member: figures.HoldingFigures(
            resource=season.resource,
            allotment=parts.get(member, 0),
            carried_in=carried.get(member, 0),
            given_back=parts.get(member, 0) + carried.get(member, 0) - had,
            taken=taken.get(member, 0),
            left=had - taken.get(member, 0),
        )
        for member, had in seasons.allotments(commons_id=commons_id, season=season.code).items()
    }
