"""The cautions of every season report: sentences that no rendering may leave out."""

CAUTIONS: tuple[str, ...] = (
    "A finding accuses nobody. It says that the recorded facts and a clause do not fit together;"
    " the slip may be wrong, the clause may not apply, and a person has to look.",
    "Fines, suspensions and every other sanction come after a fair hearing, can be appealed, and"
    " yield to the law of the place. Where this book and the law differ, the law holds.",
    "The advice is a calculation from the observations listed here. It says what it does not know."
    " It replaces neither a licensed professional nor the limits that an authority sets.",
    "The risk table counts simulated futures under one model. If the model is wrong, or the years"
    " to come are unlike the years observed, the true chances are other than these.",
    "Nothing here says that a water is safe, that a catch is fit to eat, or that anyone may or"
    " should go out. An authority's order stands above every clause of the book.",
    "Members appear by number; the secretary keeps the key to the names. Whoever knows a member"
    " may still recognise a row, so keep this report inside the association.",
    "The proof line shows tampering only to somebody who kept an earlier proof line. Keep this"
    " page: it is what the next report can be checked against.",
)
# What whoever reads one case has to mind: the first two.
OF_A_CASE = CAUTIONS[:2]
