"""The part of the recount that adds up postings: allotments, what is left, how a season ended."""

from collections import Counter
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import Any

Entry = dict[str, Any]
Figures = dict[str, Any]


@dataclass(frozen=True)
class Book:
    """All entries in order of number, and those that stand by kind."""

    entries: list[Entry]
    of_kind: Mapping[str, list[Entry]]

    def about(self, kind: str, season: str) -> Entry:
        """Return the one entry of a kind about a season."""
        (found,) = (entry for entry in self.of_kind[kind] if entry["facts"]["season"] == season)
        return found


def rights(book: Book, resource: str, season: str) -> Figures:
    """Recount a season's allowable, each member's part of it, and how it was settled."""
    adopted, close = book.about("allowable_adopted", season), book.about("season_closed", season)
    parts, brought = _issued(adopted, resource, season)
    before, settled = _balances(book.entries[: close["number"] - 1]), _balances([close])
    left, taken = (_by_member(before, f"{name}:{season}:") for name in ("left", "taken"))
    had = {member: amount + taken.get(member, 0) for member, amount in left.items()}
    landed = sum(
        line["amount"]
        for slip in _standing_slips(book, season)
        for line in slip["facts"]["lines"]
        if line["resource"] == resource
    )
    waiting = _by_member(settled, f"carried:{resource}:").values()
    came_in = sum(brought.values())
    found = _available(resource, adopted) | {
        f"{resource}.carried_in": came_in,
        f"{resource}.left": adopted["facts"]["amount"] + came_in - landed,
        f"{resource}.members_entitled": sum(amount > 0 for amount in had.values()),
        f"{resource}.settlement.given_back": sum(parts.values()) + came_in - sum(had.values()),
        f"{resource}.settlement.carried": sum(amount for amount in waiting if amount > 0),
        f"{resource}.settlement.owed": -sum(amount for amount in waiting if amount < 0),
        f"{resource}.settlement.unclaimed": settled[f"pool:{season}"],
        f"{resource}.settlement.after_close": landed - sum(taken.values()),
    }
    for member, amount in had.items():
        own, carried_in = f"member.{member}.{resource}", brought.get(member, 0)
        found[f"{own}.allotment"] = parts[member]
        found[f"{own}.carried_in"] = carried_in
        found[f"{own}.given_back"] = parts[member] + carried_in - amount
        found[f"{own}.left"] = left[member]
    return found


def next_rights(book: Book, resource: str, before: str, season: str) -> Figures:
    """Recount what each member may take in the season after, as adopted."""
    adopted, close = book.about("allowable_adopted", season), book.about("season_closed", before)
    parts, brought = _issued(adopted, resource, season)
    moved = _by_member(_balances([close]), f"carried:{resource}:")
    found = _available(f"{resource}.next", adopted)
    found[f"{resource}.next.adopted_on"] = adopted["day"]
    for member, part in parts.items():
        own, settled = f"member.{member}.{resource}.next", moved.get(member, 0)
        found[f"{own}.allotment"] = part
        found[f"{own}.carried_in"] = max(settled, 0)
        found[f"{own}.owed"] = max(-settled, 0)
        found[f"{own}.given_back"] = settled - brought.get(member, 0)
    return found


def _standing_slips(book: Book, season: str) -> list[Entry]:
    opened = book.about("season_opened", season)["facts"]
    slips = book.of_kind["withdrawal"]
    return [slip for slip in slips if opened["from"] <= slip["day"] < opened["until"]]


def _available(name: str, adopted: Entry) -> Figures:
    amount, reserve = adopted["facts"]["amount"], adopted["facts"]["reserve"]
    parts = {"allowable": amount, "reserve": reserve, "allotted": amount - reserve}
    return {f"{name}.{part}": value for part, value in parts.items()}


def _issued(
    adopted: Entry, resource: str, season: str
) -> tuple[Mapping[int, int], Mapping[int, int]]:
    """Return each member's part of an allowable, and what came with it from the season before."""
    moved = _balances([adopted])
    waiting = _by_member(moved, f"carried:{resource}:")
    brought = {member: -amount for member, amount in waiting.items()}
    given = _by_member(moved, f"left:{season}:")
    return {member: amount - brought.get(member, 0) for member, amount in given.items()}, brought


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
