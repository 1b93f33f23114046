"""A stock's yearly catches and index of abundance, checked before anything is fitted to them."""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import ClassVar

import numpy as np
from numpy.typing import NDArray

from governance.errors import StintbookError
from governance.regeneration.growth import FloatArray

# r, K, q and sigma are estimated; with no more index values than that, nothing is left to judge by.
FEWEST_INDEX_YEARS = 5


class BrokenYears(StintbookError):
    """Years, catches and index do not stand side by side, one for each year in turn."""

    code: ClassVar[str] = "series.broken_years"
    message: ClassVar[str] = "Found {found}; accepted are years in turn, each with its own numbers."


class TooFewYears(StintbookError):
    """The index has too few values for the parameters."""

    code: ClassVar[str] = "series.too_few_years"
    message: ClassVar[str] = "Found {found} years with an index; at least {accepted} are needed."


class ImpossibleCatch(StintbookError):
    """A catch is negative or not a number."""

    code: ClassVar[str] = "series.impossible_catch"
    message: ClassVar[str] = "Found a catch of {found} in {year}; accepted is 0 or more."


class NonPositiveIndex(StintbookError):
    """An index is zero, negative or endless, so it has no logarithm."""

    code: ClassVar[str] = "series.non_positive_index"
    message: ClassVar[str] = "Found an index of {found} in {year}; accepted is above 0, or none."


class NoContrast(StintbookError):
    """Nothing was caught, or the index never moved: the data cannot tell a stock's growth."""

    code: ClassVar[str] = "series.no_contrast"
    message: ClassVar[str] = "The {column} never moves, so growth and size cannot be told apart."


@dataclass(frozen=True, slots=True, kw_only=True)
class Series:
    """Catch of every year, in the unit of biomass, and an index that goes with the biomass.

    ``index`` is None (or nan, kept as None) in a year without one.

    :raises BrokenYears: if the columns differ in length, or a year is missing or out of turn.
    :raises ImpossibleCatch: if a catch is negative or not a number.
    :raises NonPositiveIndex: if an index is not above zero.
    :raises TooFewYears: if fewer than five years have an index.
    :raises NoContrast: if nothing was ever caught, or the index has one value only.
    """

    years: tuple[int, ...]
    catches: tuple[float, ...]
    index: tuple[float | None, ...]

    def __post_init__(self) -> None:
        cleaned = tuple(None if each is None or math.isnan(each) else each for each in self.index)
        object.__setattr__(self, "index", cleaned)
        self._check_years()
        self._check_catches()
        self._check_index()

    @property
    def contrast(self) -> float:
        """Return how many times the highest index is the lowest."""
        return max(self._seen()) / min(self._seen())

    def rows(self) -> NDArray[np.intp]:
        """Return the positions of the years that have an index."""
        return np.flatnonzero([each is not None for each in self.index])

    def log_index(self) -> FloatArray:
        """Return the logarithm of the index in the years that have one."""
        return np.log(np.array(self._seen(), dtype=np.float64))

    def _seen(self) -> Sequence[float]:
        return [each for each in self.index if each is not None]

    def _check_years(self) -> None:
        lengths = (len(self.years), len(self.catches), len(self.index))
        if len(set(lengths)) > 1:
            raise BrokenYears(found=f"columns of {lengths} values")
        for before, after in zip(self.years, self.years[1:], strict=False):
            if after != before + 1:
                raise BrokenYears(found=f"{after} after {before}")

    def _check_catches(self) -> None:
        for year, caught in zip(self.years, self.catches, strict=True):
            if not 0 <= caught < math.inf:
                raise ImpossibleCatch(found=caught, year=year)

    def _check_index(self) -> None:
        for year, each in zip(self.years, self.index, strict=True):
            if each is not None and not 0 < each < math.inf:
                raise NonPositiveIndex(found=each, year=year)
        if len(self._seen()) < FEWEST_INDEX_YEARS:
            raise TooFewYears(found=len(self._seen()), accepted=FEWEST_INDEX_YEARS)
        if not any(self.catches):
            raise NoContrast(column="catch")
        if self.contrast == 1:
            raise NoContrast(column="index")
