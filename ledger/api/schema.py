"""The OpenAPI document: beside what each address answers, every way in which it refuses."""

from typing import Any

from drf_spectacular.openapi import AutoSchema
from drf_spectacular.utils import OpenApiResponse

from ledger.api import answers, problems
from ledger.api.views import CommonsView

REFUSALS = (400, 401, 403, 404, 405, 406, 429, 503)
WRITING = (409, 413, 415, 422)
EDITING = (412, 428)


class ProblemSchema(AutoSchema):
    """Documents the problem answers of every operation, and the token it needs."""

    def get_response_serializers(self) -> Any:
        """Return what an operation answers, with its refusals."""
        found: Any = super().get_response_serializers()
        if not isinstance(self.view, CommonsView):
            return found
        codes = list(REFUSALS)
        if self.method in ("POST", "PATCH", "DELETE"):
            codes += WRITING
        if self.method == "PATCH" or any(
            each["name"] == "If-Match" for each in self._get_parameters()
        ):
            codes += EDITING
        if self.method == "GET":
            codes.append(409)
        refusals = {
            (code, problems.MEDIA_TYPE): OpenApiResponse(
                answers.ProblemOut, description="Refused; the document says why."
            )
            for code in codes
        }
        return dict(found) | refusals

    def get_auth(self) -> Any:
        """Return how an operation is opened."""
        return [{"token": []}] if isinstance(self.view, CommonsView) else []


def close(result: dict[str, Any], **kwargs: Any) -> dict[str, Any]:
    """Finish the document: no object takes a field that is not named, and the token is told of."""
    components = result.setdefault("components", {})
    for shape in components.get("schemas", {}).values():
        if shape.get("type") == "object":
            shape.setdefault("additionalProperties", False)
    components["securitySchemes"] = {"token": {"type": "http", "scheme": "bearer"}}
    return result
