"""A book's quota clause and the facts of a resource make an advice; people adopt it or do not."""

from typing import assert_never

import numpy as np

from governance.advice import by_model, by_survey
from governance.advice.records import Advice
from governance.advice.request import Request
from governance.bylaws import clauses


def advise(*, request: Request, generator: np.random.Generator) -> Advice:
    """Return the advice that a quota clause calls for.

    :param generator: made from the request's seed; the same seed and facts give the same advice.
    :raises governance.errors.StintbookError: if the facts do not bear an advice, saying why.
    """
    match request.clause.method:
        case clauses.ByGrowthModel() as method:
            return by_model.advise(request=request, method=method, generator=generator)
        case clauses.BySurvey() as method:
            return by_survey.advise(request=request, method=method)
        case _:
            assert_never(request.clause.method)
