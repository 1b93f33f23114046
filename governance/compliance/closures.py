"""Closed times and places: a clause's own yearly window, and an outside authority's orders."""

from collections.abc import Iterable, Sequence
from datetime import date

import numpy as np

from governance import facts, periods
from governance.bylaws import clauses, words
from governance.compliance import evidence, findings, forbidden, ground, sentences


def in_closed_window(
    *,
    clause: clauses.ClosedWindow,
    book: clauses.Book,
    live: ground.Mask,
    laid: ground.Ground,
) -> tuple[findings.Finding, ...]:
    """Return one finding per member and day with a take in a closed zone on a closed day.

    The whole of such takes is breach and overuse.

    :param live: the days of the season on which this version of the clause is in force.
    """
    closed = live & np.array([_is_closed(clause.closed, day) for day in laid.season.days()])
    line = _window_line(clause)
    return tuple(
        forbidden.finding(
            clause_id=clause.head.id,
            or_else=clause.head.or_else,
            book=book,
            takes=takes,
            acts=acts,
            lines=(line,),
            reasons=(),
        )
        for takes in laid.takes_of(clause.resource)
        for acts in _closed_takes(
            takes=takes,
            closed=_days_of_zones(clause.zones, takes.table.zones)[:, np.newaxis] & closed,
            who=clause.head.who,
        )
    )


def against_orders(
    *,
    clause: clauses.OutsideOrder,
    book: clauses.Book,
    live: ground.Mask,
    laid: ground.Ground,
) -> tuple[findings.Finding, ...]:
    """Return one finding per member and day with a take from a zone that an order closes.

    :param live: the days of the season on which this version of the clause is in force.
    """
    orders = sorted(
        (each for each in laid.facts.orders if each.resource == clause.resource),
        key=lambda order: order.entry,
    )
    found = []
    for takes in laid.takes_of(clause.resource):
        closed = np.zeros((len(takes.table.zones), laid.season.length_days), dtype=np.bool_)
        for order in orders:
            days = live & laid.days_in(order.during)
            closed |= _days_of_zones(order.zones, takes.table.zones)[:, np.newaxis] & days
        for acts in _closed_takes(takes=takes, closed=closed, who=clause.head.who):
            broken = _orders_over(orders, acts=acts)
            found.append(
                forbidden.finding(
                    clause_id=clause.head.id,
                    or_else=clause.head.or_else,
                    book=book,
                    takes=takes,
                    acts=acts,
                    lines=(_order_line(order) for order in broken),
                    reasons=(_order_row(order) for order in broken),
                )
            )
    return tuple(found)


def _is_closed(closed: clauses.YearlyWindow, day: date) -> bool:
    """Return whether a day lies in a yearly window, which may run across the new year."""
    this = (day.month, day.day)
    if closed.first <= closed.last:
        return closed.first <= this <= closed.last
    return this >= closed.first or this <= closed.last


def _days_of_zones(named: Sequence[str], zones: Sequence[str]) -> ground.Mask:
    """Return which of a table's zones are meant; no zone named means every one."""
    return np.array([not named or zone in named for zone in zones], dtype=np.bool_)


def _closed_takes(
    *, takes: ground.Takes, closed: ground.Mask, who: str | None
) -> Iterable[tuple[evidence.Act, ...]]:
    """Yield the acts of each (member, day) that lie on closed (zone, day) pairs."""
    if not closed.any():
        return
    place = takes.table.zone * closed.shape[1] + takes.offset
    rows = np.flatnonzero(closed.ravel()[place] & takes.bound[who] & (takes.table.amount > 0))
    for _, acts in evidence.grouped(table=takes.table, rows=rows, by=takes.cell):
        yield acts


def _window_line(clause: clauses.ClosedWindow) -> str:
    where = ", ".join(clause.zones) if clause.zones else "everywhere"
    first = words.day_of_year(clause.closed.first)
    last = words.day_of_year(clause.closed.last)
    return f"Closed each year from {first} to {last}, both days included: {where}."


def _orders_over(
    orders: Sequence[facts.Order], *, acts: Sequence[evidence.Act]
) -> tuple[facts.Order, ...]:
    """Return the orders that some act of one day goes against."""
    day = periods.date_of(acts[0].day)
    zones = {act.zone for act in acts}
    return tuple(
        order
        for order in orders
        if order.during.holds(day) and (not order.zones or zones & set(order.zones))
    )


def _order_line(order: facts.Order) -> str:
    where = ", ".join(order.zones) if order.zones else "everywhere"
    return (
        f"Order {order.entry} of {order.authority} closed {where} {sentences.when(order.during)}."
    )


def _order_row(order: facts.Order) -> str:
    return evidence.line(order.entry, order.authority, order.during.first, order.during.until)
