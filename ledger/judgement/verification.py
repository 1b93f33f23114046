"""The findings as kept, held against what the judge finds anew in the entries."""

from collections import defaultdict
from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from datetime import date, timedelta

from governance.compliance import reach
from governance.compliance.findings import Finding, Key
from governance.errors import StintbookError
from governance.periods import DateRange
from ledger.commons import queries as commons
from ledger.journal import comparing
from ledger.journal import queries as journal
from ledger.journal.verification import Problem
from ledger.judgement import columns, models, queries
from ledger.seasons import queries as seasons


@dataclass(frozen=True, slots=True, kw_only=True)
class _Moment:
    """What the judge knew: the entries up to a number, and the days up to one."""

    up_to: int
    as_of: date


@dataclass(frozen=True, slots=True, kw_only=True)
class _Kept:
    """A kept version of a finding, readable, and its row."""

    row: models.FindingVersion
    finding: Finding

    @property
    def name(self) -> str:
        return _name(self.row.finding, self.finding)


def problems(*, commons_id: int) -> tuple[Problem, ...]:
    """Return where the findings kept are not those that the judge makes of the same facts.

    Every open window is judged anew as known where the judge stands, a closed season as known at
    its close, a version that another followed as known when it was made. Judging reads members,
    editions and seasons: hold those against their entries first.

    The sentences of the working are compared too: a program that words them otherwise has to keep
    the old words for the findings that were kept under them.
    """
    cursor, rows = _standing(commons_id)
    if cursor is None or cursor.judged_on is None:
        return tuple(_one(row, "it stands, but where the judge stands is not kept") for row in rows)
    size = journal.head(commons_id=commons_id).size
    if cursor.judged_up_to > size:
        what = f"the judge is said to have read {cursor.judged_up_to:,} entries of {size:,}"
        return (Problem(invariant="findings", number=None, what=what),)
    told: list[Problem] = []
    versions = _readable(rows, told)
    told += _numbering(versions)
    told += _places(versions, cursor)
    moment = _Moment(up_to=cursor.judged_up_to, as_of=cursor.judged_on)
    expected = _expected(commons_id, moment, [row for kept in versions.values() for row in kept])
    told += _latest(versions, expected)
    told += _followed(commons_id, versions)
    return tuple(told)


def _standing(
    commons_id: int,
) -> tuple[models.Cursor | None, tuple[models.FindingVersion, ...]]:
    """Read the judge's place and the findings as of one moment, whoever judges meanwhile."""
    while True:
        before = models.Cursor.objects.filter(commons_id=commons_id).first()
        rows = tuple(
            models.FindingVersion.objects.filter(commons_id=commons_id).order_by(
                "finding", "version"
            )
        )
        after = models.Cursor.objects.filter(commons_id=commons_id).first()
        if _place(before) == _place(after):
            return after, rows


def _place(cursor: models.Cursor | None) -> tuple[int, date | None] | None:
    return None if cursor is None else (cursor.judged_up_to, cursor.judged_on)


def _readable(rows: Iterable[models.FindingVersion], told: list[Problem]) -> dict[int, list[_Kept]]:
    found: defaultdict[int, list[_Kept]] = defaultdict(list)
    for row in rows:
        try:
            finding = columns.finding(row)
        except (ValueError, TypeError, StintbookError) as error:
            told.append(_one(row, f"its row cannot be read: {error}"))
            continue
        if all(type(entry) is int for entry in finding.entries):
            found[row.finding].append(_Kept(row=row, finding=finding))
        else:
            told.append(_one(row, "its entries are no numbers"))
    return found


def _numbering(versions: Mapping[int, Sequence[_Kept]]) -> Iterator[Problem]:
    """Find gaps in the numbers, and versions that do not follow one another."""
    last = max(versions, default=0)
    for number in range(1, last + 1):
        if number not in versions:
            what = f"finding {number} is missing; numbers run to {last}"
            yield Problem(invariant="findings", number=None, what=what)
    keys: dict[Key, int] = {}
    for number, kept in versions.items():
        numbers = [each.row.version for each in kept]
        if numbers != list(range(1, len(kept) + 1)):
            yield _problem(kept[-1], f"its versions are numbered {numbers}")
        for each in kept:
            if keys.setdefault(each.finding.key, number) != number:
                yield _problem(each, f"it is finding {keys[each.finding.key]} a second time")
        if len({each.finding.key for each in kept}) > 1:
            yield _problem(kept[-1], "its versions are of several clauses, subjects or windows")


def _places(versions: Mapping[int, Sequence[_Kept]], cursor: models.Cursor) -> Iterator[Problem]:
    """Find versions said to be judged where the judge cannot have stood."""
    assert cursor.judged_on is not None
    for kept in versions.values():
        before = 0
        for each in kept:
            row, least = each.row, max((before, *each.finding.entries))
            if not least <= row.judged_up_to <= cursor.judged_up_to:
                yield _problem(each, f"it is said to be judged at entry {row.judged_up_to:,}")
            if not each.finding.key.window.first <= row.judged_on <= cursor.judged_on:
                yield _problem(each, f"it is said to be judged on {row.judged_on}")
            before = row.judged_up_to


def _latest(
    versions: Mapping[int, Sequence[_Kept]], expected: Mapping[Key, Finding]
) -> Iterator[Problem]:
    """Compare the versions that hold with what the judge finds anew."""
    left = dict(expected)
    for kept in versions.values():
        last = kept[-1]
        anew = left.pop(last.finding.key, None)
        if last.row.standing:
            yield from _compared(last, anew)
        elif anew is not None:
            yield _problem(last, "it is kept as withdrawn; judged anew it stands")
    for finding in left.values():
        what = f"{_about(finding)}: judged anew it stands, and no row of it is kept"
        yield Problem(invariant="findings", number=max(finding.entries, default=None), what=what)


def _compared(kept: _Kept, anew: Finding | None) -> Iterator[Problem]:
    if anew is None:
        yield _problem(kept, "judged anew it does not stand")
        return
    for what in comparing.fields_that_differ(
        expected=columns.fields(anew), found=columns.fields(kept.finding)
    ):
        yield _problem(kept, what)


def _followed(commons_id: int, versions: Mapping[int, Sequence[_Kept]]) -> Iterator[Problem]:
    """Compare versions that another followed with the judgement of their time, and withdrawals."""
    for kept in versions.values():
        for at, each in enumerate(kept):
            if not each.row.standing:
                if at == 0:
                    yield _problem(each, "its first version is kept as withdrawn")
                else:
                    # A withdrawal repeats what is withdrawn.
                    yield from _compared(each, kept[at - 1].finding)
            elif at + 1 < len(kept):
                yield from _compared(each, _at_its_time(commons_id, each))


def _at_its_time(commons_id: int, kept: _Kept) -> Finding | None:
    """Return what the judge finds anew of a version's subject, as known when it was made."""
    moment = _Moment(up_to=kept.row.judged_up_to, as_of=kept.row.judged_on)
    key = kept.finding.key
    members = reach.touched(
        roster=commons.roster(commons_id=commons_id, up_to=moment.up_to),
        members=frozenset({key.subject}),
    )
    windows = {
        season.during
        for season in _opened(commons_id, moment)
        if season.during.holds(key.window.first)
    }
    for window in sorted(windows):
        found = queries.judged(
            commons_id=commons_id,
            during=window,
            as_of=moment.as_of,
            up_to=moment.up_to,
            members=members,
        )
        for each in found:
            if each.key == key:
                return each
    return None


def _expected(commons_id: int, now: _Moment, kept: Sequence[_Kept]) -> dict[Key, Finding]:
    """Return what the judge finds anew in every window that has begun, by key.

    What is about a resource is found as known at the close of its season, and while that is open
    as known now. Duties are of no resource: they change until no season is open on their days.
    """
    opened = _opened(commons_id, now)
    by_code = {season.code: season for season in opened}
    closes = {
        season.code: seasons.close_entry(commons_id=commons_id, season=season.code)
        for season in opened
    }
    judged: dict[tuple[DateRange, int, date], tuple[Finding, ...]] = {}
    found: dict[Key, Finding] = {}
    for window in sorted({season.during for season in opened}):
        ends = [closes[each.code] for each in opened if each.during.overlaps(window)]
        groups = {"": None if None in ends else max(end for end in ends if end is not None)}
        groups |= {each.resource: closes[each.code] for each in opened if each.during == window}
        for resource, closed in groups.items():
            at = now if closed is None else _at_close(commons_id, closed, now, kept)
            place = (window, at.up_to, at.as_of)
            if place not in judged:
                judged[place] = queries.judged(
                    commons_id=commons_id, during=window, as_of=at.as_of, up_to=at.up_to
                )
            for each in judged[place]:
                if each.key.resource == resource and _is_of(each.key, window, by_code):
                    found.setdefault(each.key, each)
    return found


def _is_of(key: Key, window: DateRange, opened: Mapping[str, seasons.SeasonRecord]) -> bool:
    """Return whether a finding is about a season of the window that it was found in."""
    if not key.resource:
        return True
    season = seasons.holding(opened=opened, resource=key.resource, day=key.window.first)
    return season is not None and season.during == window


def _at_close(commons_id: int, closed: int, now: _Moment, kept: Iterable[_Kept]) -> _Moment:
    """Return what the judge knew when it last judged a season, before its close.

    The close follows a judgement of everything before it, as of the day before or later: later if
    a version was judged as of a later day.
    """
    day = journal.entry(commons_id=commons_id, number=closed).day - timedelta(days=1)
    days = (each.row.judged_on for each in kept if each.row.judged_up_to < closed)
    return _Moment(up_to=closed - 1, as_of=min(now.as_of, max((day, *days))))


def _opened(commons_id: int, at: _Moment) -> tuple[seasons.SeasonRecord, ...]:
    """Return the seasons that had begun and were known of."""
    known = {
        row.facts["season"]
        for row in journal.rows(commons_id=commons_id, kinds=("season_opened",), up_to=at.up_to)
    }
    return tuple(
        season
        for season in seasons.seasons(commons_id=commons_id).values()
        if season.code in known and season.during.first <= at.as_of
    )


def _one(row: models.FindingVersion, what: str) -> Problem:
    name = f"finding {row.finding}, version {row.version}"
    return Problem(invariant="findings", number=None, what=f"{name}: {what}")


def _problem(kept: _Kept, what: str) -> Problem:
    number = max(kept.finding.entries, default=None)
    return Problem(invariant="findings", number=number, what=f"{kept.name}: {what}")


def _name(number: int, finding: Finding) -> str:
    return f"finding {number} ({_about(finding)})"


def _about(finding: Finding) -> str:
    key = finding.key
    return f"clause {key.clause}, {key.subject_kind} {key.subject}, from {key.window.first}"
