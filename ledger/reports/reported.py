"""What one season report is about."""

from dataclasses import dataclass

from governance.bylaws import clauses
from governance.periods import DateRange
from ledger.commons import queries as commons
from ledger.seasons import queries as seasons


@dataclass(frozen=True, slots=True, kw_only=True)
class Reported:
    """The seasons that one report is about: those of all resources that share a window."""

    commons: commons.CommonsRecord
    during: DateRange
    seasons: tuple[seasons.SeasonRecord, ...]
    book: clauses.Book

    @property
    def commons_id(self) -> int:
        """Return the id of the commons."""
        return self.commons.commons_id
