"""South Atlantic albacore, 1967-1989: a series that others have fitted before us.

Catch in thousand tonnes, catch per unit of effort in kilograms per hundred hooks. Published by
Polacheck, Hilborn & Punt 1993 (CJFAS 50:2597-2607) and used again by Meyer & Millar 1999.
"""

YEARS = tuple(range(1967, 1990))

CATCHES = (
    *(15.9, 25.7, 28.5, 23.7, 25.0, 33.3, 28.2, 19.7, 17.5, 19.3, 21.6, 23.1),
    *(22.5, 22.5, 23.6, 29.1, 14.4, 13.2, 28.4, 34.6, 37.5, 25.9, 25.3),
)

INDEX = (
    *(61.89, 78.98, 55.59, 44.61, 56.89, 38.27, 33.84, 36.13, 41.95, 36.63, 36.33, 38.82),
    *(34.32, 37.64, 34.01, 32.16, 26.88, 36.61, 30.07, 30.75, 23.36, 22.36, 21.91),
)
