"""A small book with most kinds of clause, to be broken in one place at a time."""

import pytest

from governance.bylaws import clauses, documents
from governance.bylaws.problems import Problem, UnreadableBook

BOOK = """\
book: Reed Bank
edition: 2
adopted: {by: assembly, on: 2026-02-14, votes: {for: 9, against: 1, abstained: 0}}
in_force: {from: 2026-03-01}
zone: Europe/Dublin
money: EUR
resources:
  clams: {unit: kg, base: g}
  hours: {unit: h, base: min}
clauses:
  - id: "1.1"
    title: Who belongs
    kind: membership
    what: {classes: [licensed, retired]}
    text: All of us.
  - id: "3.10"
    title: Forty kilos
    kind: quantity_limit
    who: {class: licensed}
    must_not: withdraw
    what: {resource: clams, more_than: 40 kg, per: day, counted_by: household, tolerance: 5 %}
    or_else: overdraw
    text: No more than forty kilos.
  - id: "4.1"
    title: Closed
    kind: closed_window
    must_not: withdraw
    what: {resource: clams, zones: [north_bar]}
    when: {from: 10 April, through: 30 April}
    text: Leave them.
  - id: "5.1"
    title: Slips
    kind: reporting_duty
    must: report
    what: {within: 48 h}
    text: On paper.
  - id: "6.1"
    title: Work
    kind: work_duty
    must: contribute
    what: {work: 2 d, day: 6 h, per: season, instead: 60 EUR/d}
    or_else: shirking
    text: Two days.
ladders:
  overdraw:
    title: Too much
    window: 730 d
    steps:
      - warning: {}
      - fine: {per_excess: 3 EUR/kg, at_most: 200 EUR}
      - suspension: {days: 14}
  shirking:
    title: Too little
    window: 730 d
    steps:
      - fine: {flat: 40 EUR}
quota:
  clams:
    title: How many
    observe: [survey, catch]
    growth: schaefer
    order: take_then_grow
    rule: {kind: hockey_stick, limit: 0.2 K, trigger: 0.5 K, fraction: 0.8 Fmsy}
    change_at_most: {up: 20 %, down: 30 %, unless_below: 0.2 K}
    risk: {below: 0.2 K, at_most: 5 %}
    review: {days_before_season: 45}
    confirm: {by: board, approvals: 2}
"""


def read(text: str) -> clauses.Book:
    return documents.read(text=text, name="bylaws.yaml")


def problems_of(text: str) -> tuple[Problem, ...]:
    with pytest.raises(UnreadableBook) as refused:
        read(text)
    return refused.value.problems
