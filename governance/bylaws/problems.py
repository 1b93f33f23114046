"""What is wrong with a book's text: one problem for each place, collected and raised together."""

from dataclasses import dataclass
from typing import ClassVar, Protocol

from governance.errors import StintbookError

# A text that is wrong in more places than this is not a slip of the pen.
MOST_PROBLEMS = 100


@dataclass(frozen=True, slots=True, kw_only=True)
class Problem:
    """One thing that cannot be read: where it stands, what was found, what is accepted.

    ``line`` and ``column`` count from 1; ``nearest`` is the known name that was probably meant.
    """

    file: str
    line: int
    column: int
    found: str
    accepted: str
    nearest: str | None

    def __str__(self) -> str:
        hint = "" if self.nearest is None else f"; did you mean {self.nearest!r}?"
        return (
            f"{self.file}, line {self.line}, column {self.column}: "
            f"found {self.found}; accepted is {self.accepted}{hint}"
        )


class UnreadableBook(StintbookError):
    """The text of a bylaw book has problems; ``problems`` holds them in the order of the text."""

    code: ClassVar[str] = "bylaws.unreadable_book"
    message: ClassVar[str] = "The book cannot be read ({extent}).\n{listing}"

    def __init__(self, *, problems: tuple[Problem, ...], extent: str) -> None:
        listing = "\n".join(str(problem) for problem in problems)
        super().__init__(problems=problems, extent=extent, listing=listing)
        self.problems = problems


class Placed(Protocol):
    """A piece of the text; a ``refused`` one has been reported on already."""

    @property
    def line(self) -> int: ...

    @property
    def column(self) -> int: ...

    @property
    def refused(self) -> bool: ...


@dataclass(frozen=True, slots=True)
class Place:
    """A line and a column of the text, from 1."""

    line: int
    column: int
    refused: bool = False


class Problems:
    """Collects the problems of one text."""

    def __init__(self, *, file: str) -> None:
        self._file = file
        self._found: list[Problem] = []

    def add(
        self,
        *,
        at: Placed,
        found: str,
        accepted: str,
        nearest: str | None = None,
    ) -> None:
        """Note a problem, unless its piece of the text has been reported on already.

        :raises UnreadableBook: if the text has too many problems to go on.
        """
        if at.refused:
            return
        self._found.append(
            Problem(
                file=self._file,
                line=at.line,
                column=at.column,
                found=found,
                accepted=accepted,
                nearest=nearest,
            )
        )
        if len(self._found) >= MOST_PROBLEMS:
            self._refuse(extent=f"reading stopped at {MOST_PROBLEMS} problems")

    def refuse_if_any(self) -> None:
        """Raise what was noted.

        :raises UnreadableBook: if anything was noted.
        """
        count = len(self._found)
        if count:
            self._refuse(extent="1 problem" if count == 1 else f"{count} problems")

    def _refuse(self, *, extent: str) -> None:
        ordered = sorted(self._found, key=lambda each: (each.line, each.column))
        raise UnreadableBook(problems=tuple(ordered), extent=extent)
