"""The text of a short bylaw book with most kinds of clause, for tests of the book's slices."""

from datetime import date

ADOPTED_ON = date(2026, 2, 14)


def book_text(
    *,
    edition: int = 1,
    first: date = date(2026, 3, 1),
    zone: str = "Europe/Dublin",
    money: str = "EUR",
    base: str = "g",
    approvals: int = 2,
    instead: str = ", instead: 60 EUR/d",
    daily_clams: str = "40 kg",
    spawning: str = "inner_flats",
) -> str:
    """Return the text of an edition; the changes are what tests vary.

    Mullet is split by shares with 2 % in reserve, may be carried over to a tenth and is paid back;
    clams are split whole and paid back. Two beach days of 6 h are owed.

    :param instead: what follows the length of a day in the duty of work; an empty text makes a
        duty that money cannot stand for.
    """
    text = _TEXT.format(
        edition=edition,
        first=first.isoformat(),
        adopted_on=ADOPTED_ON.isoformat(),
        zone=zone,
        base=base,
        approvals=approvals,
        instead=instead,
        daily_clams=daily_clams,
        spawning=spawning,
    )
    return text.replace(" EUR", f" {money}")


_TEXT = """\
book: Reed Bank Commons
edition: {edition}
adopted: {{by: assembly, on: {adopted_on}, votes: {{for: 9, against: 1, abstained: 2}}}}
in_force: {{from: {first}}}
zone: {zone}
money: EUR
resources:
  mullet: {{unit: kg, base: {base}}}
  clams: {{unit: kg, base: {base}}}
clauses:
  - id: "1.1"
    title: Who belongs
    kind: membership
    what: {{classes: [licensed, retired]}}
    text: Whoever holds a licence may fish; the retired keep their voice.
  - id: "2.1"
    title: How the mullet is shared out
    kind: allocation
    who: {{class: licensed}}
    what: {{resource: mullet, by: shares, rounding: largest_remainder, reserve: 2 %}}
    text: By shares, two parts in a hundred stay in the pool.
  - id: "2.2"
    title: How the clams are shared out
    kind: allocation
    who: {{class: licensed}}
    what: {{resource: clams, by: shares, rounding: largest_remainder, reserve: 0 %}}
    text: By shares, down to the last gram.
  - id: "2.3"
    title: Your mullet for the season
    kind: quantity_limit
    who: {{class: licensed}}
    must_not: withdraw
    what: {{resource: mullet, more_than: allotment, per: season, counted_by: member,
           tolerance: 3 %}}
    or_else: overdraw
    text: Nobody lands more than their own measure.
  - id: "3.2"
    title: The day's clams
    kind: quantity_limit
    who: {{class: licensed}}
    must_not: withdraw
    what: {{resource: clams, more_than: {daily_clams}, per: day, counted_by: household,
           tolerance: 5 %}}
    or_else: overdraw
    text: No household lands more than this in one day.
  - id: "4.1"
    title: The mullet spawn in April
    kind: closed_window
    who: {{class: licensed}}
    must_not: withdraw
    what: {{resource: mullet, zones: [{spawning}]}}
    when: {{from: 10 April, through: 30 April}}
    or_else: closure
    text: We leave the inner flats in peace.
  - id: "4.2"
    title: When the authority closes a ground
    kind: outside_order
    must_not: withdraw
    what: {{resource: clams}}
    or_else: closure
    text: Nobody lifts a clam from a closed ground.
  - id: "5.1"
    title: Hand in your slip within two days
    kind: reporting_duty
    who: {{class: licensed}}
    must: report
    what: {{within: 48 h}}
    or_else: paperwork
    text: Within forty-eight hours.
  - id: "6.1"
    title: Two beach days a season
    kind: work_duty
    who: {{class: licensed}}
    must: contribute
    what: {{work: 2 d, day: 6 h, per: season{instead}}}
    or_else: shirking
    text: Two days of six hours.
  - id: "7.1"
    title: A little mullet may wait
    kind: carry_over
    who: {{class: licensed}}
    may: carry_over
    what: {{resource: mullet, at_most: 10 %}}
    text: Up to a tenth.
  - id: "7.3"
    title: Mullet taken beyond your measure comes off the next one
    kind: payback
    who: {{class: licensed}}
    must: pay_back
    what: {{resource: mullet, factor: 1}}
    text: A kilo for a kilo.
  - id: "7.4"
    title: Clams taken beyond your measure come off the next one
    kind: payback
    who: {{class: licensed}}
    must: pay_back
    what: {{resource: clams, factor: 1}}
    text: A kilo for a kilo.
  - id: "8.1"
    title: You are heard before anything is decided
    kind: procedure
    what: {{answer: 14 d, answer_to_warning: 7 d, appeal: 21 d, appeal_to: assembly}}
    text: Nobody is fined unheard.
ladders:
  overdraw:
    title: When more was landed than agreed
    window: 730 d
    restore: excess
    steps:
      - warning: {{}}
      - fine: {{per_excess: 3 EUR/kg, at_most: 200 EUR}}
      - suspension: {{days: 14}}
      - refer: assembly
  closure:
    title: When somebody fished where it was closed
    window: 730 d
    steps:
      - fine: {{per_excess: 5 EUR/kg, at_most: 300 EUR}}
      - suspension: {{days: 21}}
  paperwork:
    title: When slips come late
    window: 365 d
    steps:
      - warning: {{}}
      - fine: {{flat: 10 EUR}}
  shirking:
    title: When beach days are neither worked nor paid for
    window: 730 d
    steps:
      - warning: {{}}
      - fine: {{flat: 40 EUR}}
quota:
  mullet:
    title: How much mullet the bay can spare
    observe: [survey, catch]
    growth: schaefer
    order: take_then_grow
    rule: {{kind: hockey_stick, limit: 0.2 K, trigger: 0.5 K, fraction: 0.8 Fmsy}}
    change_at_most: {{up: 20 %, down: 30 %, unless_below: 0.2 K}}
    risk: {{below: 0.2 K, at_most: 5 %}}
    review: {{days_before_season: 45}}
    confirm: {{by: board, approvals: {approvals}}}
  clams:
    title: How many clams the grounds can spare
    observe: [survey]
    rule: {{kind: survey_rate, rate: 15 %}}
    review: {{days_before_season: 45}}
    confirm: {{by: board, approvals: {approvals}}}
"""
