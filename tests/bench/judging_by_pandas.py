"""The same season judged by a plain pandas script, as one would write it for a single book.

It knows the five rules of the drawn book and nothing else: no editions, no digest, no working.
"""

from typing import TYPE_CHECKING

from governance import facts
from tests.bench import judging_season

if TYPE_CHECKING:
    import pandas as pd


def frames(known: facts.SeasonFacts) -> "tuple[pd.DataFrame, pd.DataFrame]":
    """Return the takes and the members as frames: dates as dates, zones as categories."""
    import pandas as pd

    table = known.withdrawals[0]
    takes = pd.DataFrame(
        {
            "entry": table.entry,
            "member": table.member,
            "day": pd.to_datetime(table.day, unit="D"),
            "taken_at": pd.to_datetime(table.instant, unit="us", utc=True),
            "reported_at": pd.to_datetime(table.reported, unit="us", utc=True),
            "grams": table.amount,
            "zone": pd.Categorical.from_codes(table.zone, list(table.zones)),
        }
    )
    members = pd.DataFrame(
        {
            "member": [each.number for each in known.roster.members],
            "household": [each.household for each in known.roster.members],
            "licensed_until": [
                pd.Timestamp(min(each.classes[0].during.until, known.season.until))
                for each in known.roster.members
            ],
            "allotment": [known.allotments["clams", each.number] for each in known.roster.members],
        }
    )
    return takes, members


def judged(*, takes: "pd.DataFrame", members: "pd.DataFrame") -> "pd.DataFrame":
    """Return one row per breach: clause, subject, first day of the window, figures, entries."""
    import pandas as pd

    takes = takes.merge(members, on="member")
    takes = takes[takes["day"] < takes["licensed_until"]]
    found = [
        _allotment(takes),
        _daily(takes),
        _whole("4.1", takes[_in_window(takes)]),
        _whole("4.2", takes[_under_order(takes)]),
        _late(takes),
    ]
    columns = ["clause", "subject", "first", "total", "breach", "entries"]
    return pd.concat(found)[columns].sort_values(columns[:3]).reset_index(drop=True)


def _allotment(takes: "pd.DataFrame") -> "pd.DataFrame":
    import pandas as pd

    sums = takes.groupby("member").agg(total=("grams", "sum"), allotment=("allotment", "first"))
    sums["breach"] = sums["total"] - sums["allotment"] * 103 // 100
    over = sums[sums["breach"] > 0].reset_index()
    over = _with_entries(over, takes, by=["member"]).rename(columns={"member": "subject"})
    return over.assign(clause="2.4", first=pd.Timestamp(judging_season.SEASON.first))


def _daily(takes: "pd.DataFrame") -> "pd.DataFrame":
    sums = takes.groupby(["household", "day"])["grams"].sum().reset_index(name="total")
    sums["breach"] = sums["total"] - judging_season.DAILY_KG * 1_050
    over = _with_entries(sums[sums["breach"] > 0], takes, by=["household", "day"])
    return over.rename(columns={"household": "subject", "day": "first"}).assign(clause="3.2")


def _with_entries(over: "pd.DataFrame", takes: "pd.DataFrame", *, by: list[str]) -> "pd.DataFrame":
    """Return the breaches with the entries that each rests on."""
    behind = takes[[*by, "entry"]].merge(over[by], on=by)
    return over.merge(behind.groupby(by)["entry"].apply(list).reset_index(name="entries"), on=by)


def _in_window(takes: "pd.DataFrame") -> "pd.Series[bool]":
    return takes["day"].between("2026-04-10", "2026-04-30") & (
        takes["zone"] == judging_season.CLOSED_ZONE
    )


def _under_order(takes: "pd.DataFrame") -> "pd.Series[bool]":
    return takes["day"].between("2026-05-04", "2026-05-18") & takes["zone"].isin(
        judging_season.ORDERED_ZONES
    )


def _whole(clause: str, takes: "pd.DataFrame") -> "pd.DataFrame":
    sums = takes.groupby(["member", "day"]).agg(total=("grams", "sum"), entries=("entry", list))
    sums = sums.reset_index().rename(columns={"member": "subject", "day": "first"})
    return sums.assign(clause=clause, breach=sums["total"])


def _late(takes: "pd.DataFrame") -> "pd.DataFrame":
    minutes = (takes["reported_at"] - takes["taken_at"]).dt.total_seconds() / 60
    late = takes.assign(minutes=minutes)[minutes > judging_season.WITHIN_HOURS * 60]
    worst = late.groupby(["member", "day"]).agg(total=("minutes", "max"), entries=("entry", list))
    worst = worst.reset_index().rename(columns={"member": "subject", "day": "first"})
    return worst.assign(clause="5.1", breach=worst["total"] - judging_season.WITHIN_HOURS * 60)
