"""An independent recount of a season report, from the journal's entries alone.

Written with the standard library and without a look at the book's own reckoning: what it reads are
lines of JSON, an entry each, and what it knows of the trade stands below. Two things no entry says,
so they are told: which season, and which clauses count a household as one.
"""

import json
from collections import Counter, defaultdict
from collections.abc import Iterable, Mapping
from datetime import datetime
from fractions import Fraction
from statistics import median
from typing import Any

Entry = dict[str, Any]
Figures = dict[str, Any]

STATE_AFTER = {
    "note": "noted",
    "check": "checking",
    "set_aside": "set aside",
    "tell": "told",
    "attempt": "told",
    "answer": "answered",
    "close_silence": "unanswered",
    "decide": "decided",
    "open_appeal": "appeal open",
    "lodge_appeal": "under appeal",
    "uphold": "final",
    "let_stand": "final",
    "overturn": "overturned",
    "complete": "done",
    "return_to_checking": "checking",
}
ENDED = ("set aside", "overturned", "done")


def recount(lines: Iterable[str], *, first: str, household_clauses: frozenset[str]) -> Figures:
    """Return the figures of the season that begins on a day, by a name for each."""
    entries = [json.loads(line) for line in lines]
    assert [entry["number"] for entry in entries] == list(range(1, len(entries) + 1))
    standing = [e for e in entries if e["reverses"] is None and e["reversed_by"] is None]
    of_kind: defaultdict[str, list[Entry]] = defaultdict(list)
    for entry in standing:
        of_kind[entry["kind"]].append(entry)
    opened = [entry["facts"] for entry in of_kind["season_opened"]]
    mine = {each["resource"]: each for each in opened if each["from"] == first}
    until = next(iter(mine.values()))["until"]
    slips = [entry for entry in of_kind["withdrawal"] if first <= entry["day"] < until]
    found: Figures = {}
    for resource, season in mine.items():
        found |= _taken(resource, slips)
        found |= _rights(resource, season["season"], entries, of_kind)
        later = [e for e in opened if e["resource"] == resource and e["from"] > first]
        if later:
            after = min(later, key=lambda each: each["from"])
            found |= _next(resource, after["season"], entries, of_kind)
    found |= _reporting(slips)
    found |= _inspections(slips, of_kind, first=first, until=until)
    found |= _dues(of_kind, first=first, until=until)
    found |= _restitution(of_kind, seasons={s["season"]: r for r, s in mine.items()})
    found |= _duties(entries, of_kind, first=first)
    found |= _cases(standing, household_clauses)
    found |= _outside(of_kind, mine, first=first, until=until)
    return {name: value for name, value in found.items() if value not in (0, {}, [])}


def _taken(resource: str, slips: list[Entry]) -> Figures:
    """Recount what was taken: in all, by day, by zone, by member."""
    found: Counter[str] = Counter()
    names: defaultdict[str, set[Any]] = defaultdict(set)
    for slip in slips:
        for line in slip["facts"]["lines"]:
            if line["resource"] != resource:
                continue
            zone = f"{resource}.zone.{line['zone']}"
            for name in (f"{resource}.taken", f"{resource}.day.{slip['day']}", f"{zone}.taken"):
                found[name] += line["amount"]
            found[f"member.{slip['subject']}.{resource}.taken"] += line["amount"]
            names[f"{resource}.slips"].add(slip["number"])
            names[f"{zone}.slips"].add(slip["number"])
            names[f"{resource}.members_took"].add(slip["subject"])
    return dict(found) | {name: len(each) for name, each in names.items()}


def _balances(entries: Iterable[Entry]) -> Counter[str]:
    """Fold postings, reversals and all, into what stands on each account."""
    standing: Counter[str] = Counter()
    for entry in entries:
        for posting in entry["postings"]:
            standing[posting["account"]] += posting["amount"]
    return standing


def _by_member(balances: Mapping[str, int], prefix: str) -> dict[int, int]:
    return {
        int(account.removeprefix(prefix)): amount
        for account, amount in balances.items()
        if account.startswith(prefix)
    }


def _rights(
    resource: str, season: str, entries: list[Entry], of_kind: Mapping[str, list[Entry]]
) -> Figures:
    """Recount the allowable, each member's part of it, and how the season was settled."""
    (adopted,) = (e for e in of_kind["allowable_adopted"] if e["facts"]["season"] == season)
    (close,) = (e for e in of_kind["season_closed"] if e["facts"]["season"] == season)
    before = _balances(entries[: close["number"] - 1])
    left = _by_member(before, f"left:{season}:")
    taken = _by_member(before, f"taken:{season}:")
    carried_in = _by_member(_balances([adopted]), f"carried:{resource}:")
    amount, reserve = adopted["facts"]["amount"], adopted["facts"]["reserve"]
    total_taken = sum(taken.values())
    settled = _balances([close])
    waiting = _by_member(settled, f"carried:{resource}:").values()
    found: Figures = {
        f"{resource}.allowable": amount,
        f"{resource}.reserve": reserve,
        f"{resource}.allotted": amount - reserve,
        f"{resource}.carried_in": -sum(carried_in.values()),
        f"{resource}.left": amount - sum(carried_in.values()) - total_taken,
        f"{resource}.members_entitled": sum(
            left[member] + taken.get(member, 0) > 0 for member in left
        ),
        f"{resource}.settlement.carried": sum(each for each in waiting if each > 0),
        f"{resource}.settlement.owed": -sum(each for each in waiting if each < 0),
        f"{resource}.settlement.unclaimed": settled[f"pool:{season}"],
    }
    for member, remaining in left.items():
        own, brought = f"member.{member}.{resource}", -carried_in.get(member, 0)
        found[f"{own}.allotment"] = remaining + taken.get(member, 0) - brought
        found[f"{own}.carried_in"] = brought
        found[f"{own}.left"] = remaining
    return found


def _next(
    resource: str, season: str, entries: list[Entry], of_kind: Mapping[str, list[Entry]]
) -> Figures:
    """Recount the next season as adopted."""
    (adopted,) = (e for e in of_kind["allowable_adopted"] if e["facts"]["season"] == season)
    parts = [each for each in _by_member(_balances(entries), f"left:{season}:").values() if each]
    amount, reserve = adopted["facts"]["amount"], adopted["facts"]["reserve"]
    return {
        f"{resource}.next.adopted_on": adopted["day"],
        f"{resource}.next.allowable": amount,
        f"{resource}.next.reserve": reserve,
        f"{resource}.next.allotted": amount - reserve,
        f"{resource}.next.holders": len(parts),
        f"{resource}.next.smallest": min(parts),
        f"{resource}.next.median": int(median(parts)),
        f"{resource}.next.largest": max(parts),
    }


def _reporting(slips: list[Entry]) -> Figures:
    hours = [
        Fraction(round(_seconds(slip["occurred_at"], slip["facts"]["handed_in"])), 3600)
        for slip in slips
    ]
    return {
        "reporting.slips": len(hours),
        "reporting.within_24": sum(each <= 24 for each in hours),
        "reporting.within_48": sum(24 < each <= 48 for each in hours),
        "reporting.later": sum(each > 48 for each in hours),
        "reporting.median_hours": median(hours),
    }


def _seconds(start: str, end: str) -> float:
    return (datetime.fromisoformat(end) - datetime.fromisoformat(start)).total_seconds()


def _inspections(
    slips: list[Entry], of_kind: Mapping[str, list[Entry]], *, first: str, until: str
) -> Figures:
    """Recount the checks by class of member; scales and slip agree within a tenth of the slip."""
    class_of = {e["subject"]: e["facts"]["class"] for e in of_kind["member_admitted"]}
    written = {slip["facts"]["slip"]: slip for slip in slips}
    checked: dict[str, bool] = {}
    for check in of_kind["inspection"]:
        slip = written.get(check["facts"]["slip"])
        if slip is None or not first <= check["day"] < until:
            continue
        given: Counter[str] = Counter()
        for line in slip["facts"]["lines"]:
            given[line["resource"]] += line["amount"]
        differs = any(
            10 * abs(seen["amount"] - given[seen["resource"]]) > given[seen["resource"]]
            for seen in check["facts"]["seen"]
        )
        checked[check["facts"]["slip"]] = checked.get(check["facts"]["slip"], False) or differs
    found: Counter[str] = Counter()
    for name, slip in written.items():
        of_class = f"inspections.{class_of[slip['subject']]}"
        found[f"{of_class}.slips"] += 1
        found[f"{of_class}.checked"] += name in checked
        found[f"{of_class}.differences"] += checked.get(name, False)
    return dict(found)


def _dues(of_kind: Mapping[str, list[Entry]], *, first: str, until: str) -> Figures:
    found: Counter[str] = Counter()
    for entry in of_kind["due_charged"]:
        kind, amount = entry["facts"]["due"], entry["facts"]["amount"]
        found[f"dues.{kind}.count"] += 1
        found[f"dues.{kind}.charged"] += amount
        found[f"dues.{kind}.open"] += amount
        found[f"member.{entry['subject']}.dues_owed"] += amount
    for entry in of_kind["due_paid"]:
        kind, amount = entry["facts"]["due"], entry["facts"]["amount"]
        found[f"dues.{kind}.paid"] += amount
        found[f"dues.{kind}.open"] -= amount
        found[f"member.{entry['subject']}.dues_owed"] -= amount
    for entry in of_kind["money_given_instead"]:
        if first <= entry["day"] < until:
            found["dues.instead of work.count"] += 1
            found["dues.instead of work.charged"] += entry["facts"]["amount"]
            found["dues.instead of work.paid"] += entry["facts"]["amount"]
    return dict(found)


def _restitution(of_kind: Mapping[str, list[Entry]], *, seasons: Mapping[str, str]) -> Figures:
    found: Counter[str] = Counter()
    for entry in of_kind["given_back"]:
        resource = seasons[entry["facts"]["season"]]
        found[f"restitution.{resource}.count"] += 1
        found[f"restitution.{resource}.given"] += entry["facts"]["amount"]
    return dict(found)


def _duties(entries: list[Entry], of_kind: Mapping[str, list[Entry]], *, first: str) -> Figures:
    (assessed,) = (e for e in of_kind["duties_assessed"] if e["facts"]["from"] == first)
    owed: Counter[int] = Counter()
    for posting in assessed["postings"]:
        if posting["account"].startswith("duty:"):
            owed[int(posting["account"].rpartition(":")[2])] += posting["amount"]
    given: Counter[int] = Counter()
    totals: Counter[str] = Counter()
    for name, kind in (("rendered", "work_given"), ("replaced", "money_given_instead")):
        for entry in of_kind[kind]:
            given[entry["subject"]] += entry["facts"]["minutes"]
            totals[f"duties.{name}"] += entry["facts"]["minutes"]
    short = {member: amount - given[member] for member, amount in owed.items()}
    short = {member: amount for member, amount in short.items() if amount > 0}
    found: Figures = {"duties.owed": owed.total(), "duties.short": sum(short.values())}
    found |= {"duties.members_short": len(short), **totals}
    for name, by_member in (("duty_owed", owed), ("duty_rendered", given), ("duty_short", short)):
        found |= {f"member.{member}.{name}": amount for member, amount in by_member.items()}
    return found


def _cases(standing: list[Entry], household_clauses: frozenset[str]) -> Figures:
    """Recount cases by state, and what the book found, as far as it noted a case on it."""
    state: dict[int, str] = {}
    note: dict[int, Entry] = {}
    withdrawn: set[int] = set()
    for entry in standing:
        move = entry["kind"].removeprefix("case_")
        if move == entry["kind"]:
            continue
        number = entry["facts"]["case"]
        state[number] = STATE_AFTER[move]
        note.setdefault(number, entry)
        if move == "return_to_checking" and "was withdrawn" in entry["texts"]["reason"]:
            withdrawn.add(number)
    found: Counter[str] = Counter(f"cases.{each}" for each in state.values())
    for number, entry in note.items():
        clause = entry["facts"]["clause"]
        found[f"findings.{clause}.found"] += 1
        found[f"findings.{clause}.withdrawn"] += number in withdrawn
        found[f"findings.{clause}.standing"] += number not in withdrawn
        if state[number] not in ENDED:
            is_shared = clause in household_clauses
            whose = entry["facts"]["subjects"] if is_shared else [entry["subject"]]
            found.update(f"member.{member}.open_cases" for member in whose)
    return dict(found)


def _outside(
    of_kind: Mapping[str, list[Entry]], mine: Mapping[str, Any], *, first: str, until: str
) -> Figures:
    """Recount the orders of the season, and the readings of its year and later."""
    found: Figures = {}
    for entry in of_kind["outside_order"]:
        order = entry["facts"]
        if order["from"] < until and order["until"] > first and order["resource"] in mine:
            name = f"order.{order['resource']}.{order['from']}.{order['until']}"
            found[name] = sorted(order["zones"])
    for entry in of_kind["observation"]:
        seen = entry["facts"]
        if seen["year"] >= int(first[:4]) and seen["resource"] in mine:
            name = ".".join(str(seen[part]) for part in ("resource", "kind", "zone", "year"))
            found[f"observation.{name}"] = Fraction(seen["value"])
    return found
