"""An independent recount of a season report, from the journal's entries alone, a JSON line each.

Written with the standard library, without a look at the book's own reckoning. Two things no entry
says, so they are told: which season, and which clauses count a household as one.
"""

import json
from collections import Counter, defaultdict
from collections.abc import Iterable
from datetime import datetime, timedelta
from fractions import Fraction
from statistics import median
from typing import Any

from tests.acceptance import recount_accounts as accounts

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
    return {name: value for name, value in found.items() if value not in (0, None, [])}


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

    def within(self, kind: str) -> list[Entry]:
        return [each for each in self.of_kind[kind] if self.first <= each["day"] < self.until]

    def figures(self) -> Figures:
        found = self.reporting() | self.inspections() | self.dues()
        found |= self.duties() | self.cases() | self.outside()
        book = accounts.Book(self.entries, self.of_kind)
        for resource, season in self.mine.items():
            found |= self.taken(resource) | accounts.rights(book, resource, season["season"])
            later = [e for e in self.opened if e["resource"] == resource and e["from"] > self.first]
            if later:
                after = min(later, key=lambda each: each["from"])["season"]
                found |= accounts.next_rights(book, resource, season["season"], after)
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
        counted: Counter[str] = Counter()
        found: Figures = {}
        for number, (note, *later) in events.items():
            state = STATE_AFTER[[note, *later][-1]["kind"]]
            withdrawn = any("was withdrawn" in each["texts"].get("reason", "") for each in later)
            clause = note["facts"]["clause"]
            counted[f"cases.{state}"] += 1
            counted[f"findings.{clause}.found"] += 1
            counted[f"findings.{clause}.{'withdrawn' if withdrawn else 'standing'}"] += 1
            if state not in ENDED:
                whose = note["facts"]["subjects"] if clause in self.shared else [note["subject"]]
                counted.update(f"member.{member}.open_cases" for member in whose)
            course = {"state": state, "finding": note["facts"]["finding"], **_course(later)}
            found |= {f"case.{number}.{name}": value for name, value in course.items()}
        return found | dict(counted)

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


def _course(events: list[Entry]) -> Figures:
    """Return what a case has come to: a return to checking undoes the notice and the decision."""
    found: Figures = {}
    for entry in events:
        facts, move = entry["facts"], entry["kind"].removeprefix("case_")
        if move == "return_to_checking":
            found = {}
        elif move in ("tell", "attempt") and facts["delivery"]["proved"]:
            found["told_on"] = facts["delivery"]["on"]
        elif move == "decide":
            found |= {"decided_on": entry["day"], "amount": facts["amount_minor"]}
            found["step"] = facts["step"] + 1
        elif move in ("uphold", "let_stand"):
            found["final_on"] = entry["day"]
    return found
