"""An independent recount of a season report, from the journal's entries alone, a JSON line each.

Written with the standard library, without a look at the book's own reckoning. Two things no entry
says, so they are told: which season, and which clauses count a household as one.
"""

import json
from collections import Counter, defaultdict
from collections.abc import Iterable, Mapping
from datetime import datetime, timedelta
from fractions import Fraction
from statistics import median
from typing import Any

Entry = dict[str, Any]
Figures = dict[str, Any]

# By which moves a case comes to a state.
MOVES_TO = {
    "noted": ("note",),
    "checking": ("check", "return_to_checking"),
    "set aside": ("set_aside",),
    "told": ("tell", "attempt"),
    "answered": ("answer",),
    "unanswered": ("close_silence",),
    "decided": ("decide",),
    "appeal open": ("open_appeal",),
    "under appeal": ("lodge_appeal",),
    "final": ("uphold", "let_stand"),
    "overturned": ("overturn",),
    "done": ("complete",),
}
STATE_AFTER = {f"case_{move}": state for state, moves in MOVES_TO.items() for move in moves}
ENDED = ("set aside", "overturned", "done")


def recount(lines: Iterable[str], *, first: str, household_clauses: frozenset[str]) -> Figures:
    """Return the figures of the season that begins on a day, by a name for each; noughts left out.

    :param lines: an entry each, in order of number.
    """
    found = _Recount([json.loads(line) for line in lines], first, household_clauses).figures()
    return {name: value for name, value in found.items() if value not in (0, {}, [])}


class _Recount:
    def __init__(self, entries: list[Entry], first: str, household_clauses: frozenset[str]) -> None:
        assert [entry["number"] for entry in entries] == list(range(1, len(entries) + 1))
        self.entries, self.first, self.shared = entries, first, household_clauses
        self.standing = [e for e in entries if e["reverses"] is None and e["reversed_by"] is None]
        self.of_kind: defaultdict[str, list[Entry]] = defaultdict(list)
        for entry in self.standing:
            self.of_kind[entry["kind"]].append(entry)
        self.opened = [entry["facts"] for entry in self.of_kind["season_opened"]]
        self.mine = {each["resource"]: each for each in self.opened if each["from"] == first}
        (self.until,) = {each["until"] for each in self.mine.values()}
        self.slips = self.within("withdrawal")
        self.adopted = {e["facts"]["season"]: e for e in self.of_kind["allowable_adopted"]}

    def within(self, kind: str) -> list[Entry]:
        return [each for each in self.of_kind[kind] if self.first <= each["day"] < self.until]

    def figures(self) -> Figures:
        found = self.reporting() | self.inspections() | self.dues()
        found |= self.duties() | self.cases() | self.outside()
        for resource, season in self.mine.items():
            found |= self.taken(resource) | self.rights(resource, season["season"])
            later = [e for e in self.opened if e["resource"] == resource and e["from"] > self.first]
            if later:
                found |= self.next(resource, min(later, key=lambda e: e["from"])["season"])
        return found

    def taken(self, resource: str) -> Figures:
        found: Counter[str] = Counter()
        names: defaultdict[str, set[Any]] = defaultdict(set)
        for slip in self.slips:
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

    def rights(self, resource: str, season: str) -> Figures:
        adopted = self.adopted[season]
        (close,) = (e for e in self.of_kind["season_closed"] if e["facts"]["season"] == season)
        before, settled = _balances(self.entries[: close["number"] - 1]), _balances([close])
        left, taken = (_by_member(before, f"{name}:{season}:") for name in ("left", "taken"))
        brought = _by_member(_balances([adopted]), f"carried:{resource}:")
        waiting = _by_member(settled, f"carried:{resource}:").values()
        available = adopted["facts"]["amount"] - sum(brought.values())
        found = _issued(resource, adopted) | {
            f"{resource}.carried_in": -sum(brought.values()),
            f"{resource}.left": available - sum(taken.values()),
            f"{resource}.members_entitled": sum(left[m] + taken.get(m, 0) > 0 for m in left),
            f"{resource}.settlement.carried": sum(each for each in waiting if each > 0),
            f"{resource}.settlement.owed": -sum(each for each in waiting if each < 0),
            f"{resource}.settlement.unclaimed": settled[f"pool:{season}"],
        }
        for member, remaining in left.items():
            own, carried_in = f"member.{member}.{resource}", -brought.get(member, 0)
            found[f"{own}.allotment"] = remaining + taken.get(member, 0) - carried_in
            found[f"{own}.carried_in"] = carried_in
            found[f"{own}.left"] = remaining
        return found

    def next(self, resource: str, season: str) -> Figures:
        adopted = self.adopted[season]
        left = _by_member(_balances(self.entries), f"left:{season}:").values()
        parts = [part for part in left if part > 0]
        return _issued(f"{resource}.next", adopted) | {
            f"{resource}.next.adopted_on": adopted["day"],
            f"{resource}.next.holders": len(parts),
            f"{resource}.next.smallest": min(parts),
            f"{resource}.next.median": int(median(parts)),
            f"{resource}.next.largest": max(parts),
        }

    def reporting(self) -> Figures:
        read, second = datetime.fromisoformat, timedelta(seconds=1)
        times = [(read(s["occurred_at"]), read(s["facts"]["handed_in"])) for s in self.slips]
        hours = [Fraction((end - start) // second, 3600) for start, end in times]
        return {
            "reporting.slips": len(hours),
            "reporting.within_24": sum(each <= 24 for each in hours),
            "reporting.within_48": sum(24 < each <= 48 for each in hours),
            "reporting.later": sum(each > 48 for each in hours),
            "reporting.median_hours": median(hours),
        }

    def inspections(self) -> Figures:
        """Recount checks by class of member; scales and slip agree within a tenth of the slip."""
        class_of = {e["subject"]: e["facts"]["class"] for e in self.of_kind["member_admitted"]}
        seen_of: defaultdict[str, list[Any]] = defaultdict(list)
        for check in self.within("inspection"):
            seen_of[check["facts"]["slip"]] += check["facts"]["seen"]
        found: Counter[str] = Counter()
        for slip in self.slips:
            given: Counter[str] = Counter()
            for line in slip["facts"]["lines"]:
                given[line["resource"]] += line["amount"]
            seen = seen_of[slip["facts"]["slip"]]
            pairs = [(each["amount"], given[each["resource"]]) for each in seen]
            of_class = f"inspections.{class_of[slip['subject']]}"
            found[f"{of_class}.slips"] += 1
            found[f"{of_class}.checked"] += bool(seen)
            found[f"{of_class}.differences"] += any(10 * abs(a - b) > b for a, b in pairs)
        return dict(found)

    def dues(self) -> Figures:
        found: Counter[str] = Counter()
        for kind, name, sign in (("due_charged", "charged", 1), ("due_paid", "paid", -1)):
            for entry in self.of_kind[kind]:
                due, amount = f"dues.{entry['facts']['due']}", entry["facts"]["amount"]
                found[f"{due}.count"] += name == "charged"
                found[f"{due}.{name}"] += amount
                found[f"{due}.open"] += sign * amount
                found[f"member.{entry['subject']}.dues_owed"] += sign * amount
        for entry in self.within("money_given_instead"):
            found["dues.instead of work.count"] += 1
            for name in ("charged", "paid"):
                found[f"dues.instead of work.{name}"] += entry["facts"]["amount"]
        resource_of = {each["season"]: resource for resource, each in self.mine.items()}
        for entry in self.of_kind["given_back"]:
            resource = resource_of[entry["facts"]["season"]]
            found[f"restitution.{resource}.count"] += 1
            found[f"restitution.{resource}.given"] += entry["facts"]["amount"]
        return dict(found)

    def duties(self) -> Figures:
        owed: Counter[int] = Counter()
        for entry in self.of_kind["duties_assessed"]:
            for posting in entry["postings"] if entry["facts"]["from"] == self.first else ():
                if posting["account"].startswith("duty:"):
                    owed[int(posting["account"].rpartition(":")[2])] += posting["amount"]
        given: Counter[int] = Counter()
        found: Figures = {}
        for name, kind in (("rendered", "work_given"), ("replaced", "money_given_instead")):
            gifts = [(e["subject"], e["facts"]["minutes"]) for e in self.within(kind)]
            found[f"duties.{name}"] = sum(minutes for _, minutes in gifts)
            for member, minutes in gifts:
                given[member] += minutes
        short = owed - given
        found |= {"duties.owed": owed.total(), "duties.short": short.total()}
        found["duties.members_short"] = len(short)
        for name, of in (("duty_owed", owed), ("duty_rendered", given), ("duty_short", short)):
            found |= {f"member.{member}.{name}": amount for member, amount in of.items()}
        return found

    def cases(self) -> Figures:
        """Recount cases by state, and what was found, as far as a case was noted on it."""
        events: defaultdict[int, list[Entry]] = defaultdict(list)
        for entry in self.standing:
            if entry["kind"] in STATE_AFTER:
                events[entry["facts"]["case"]].append(entry)
        found: Counter[str] = Counter()
        for note, *later in events.values():
            state = STATE_AFTER[[note, *later][-1]["kind"]]
            withdrawn = any("was withdrawn" in each["texts"].get("reason", "") for each in later)
            clause = note["facts"]["clause"]
            found[f"cases.{state}"] += 1
            found[f"findings.{clause}.found"] += 1
            found[f"findings.{clause}.{'withdrawn' if withdrawn else 'standing'}"] += 1
            if state not in ENDED:
                whose = note["facts"]["subjects"] if clause in self.shared else [note["subject"]]
                found.update(f"member.{member}.open_cases" for member in whose)
        return dict(found)

    def outside(self) -> Figures:
        """Recount the orders of the season, and the readings of its year and later."""
        found: Figures = {}
        for entry in self.of_kind["outside_order"]:
            order = entry["facts"]
            if order["from"] < self.until and order["until"] > self.first:
                name = f"order.{order['resource']}.{order['from']}.{order['until']}"
                found[name] = sorted(order["zones"])
        for entry in self.of_kind["observation"]:
            seen = entry["facts"]
            if seen["year"] >= int(self.first[:4]):
                name = ".".join(str(seen[part]) for part in ("resource", "kind", "zone", "year"))
                found[f"observation.{name}"] = Fraction(seen["value"])
        return found


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


def _issued(name: str, adopted: Entry) -> Figures:
    amount, reserve = adopted["facts"]["amount"], adopted["facts"]["reserve"]
    parts = {"allowable": amount, "reserve": reserve, "allotted": amount - reserve}
    return {f"{name}.{part}": value for part, value in parts.items()}
