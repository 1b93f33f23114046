"""What is added to the OpenAPI document: how each address refuses, and the bounds of its parts."""

from typing import Any

from drf_spectacular.openapi import AutoSchema

from ledger.api import problems

REFUSALS = (400, 401, 403, 404, 405, 406, 409, 429, 503)
WRITING = (413, 415, 422)
EDITING = (412, 428)
_METHODS = ("get", "post", "patch", "delete")
_NAME = {"maxLength": 60, "pattern": "^[-a-zA-Z0-9_]+$"}


class TokenSchema(AutoSchema):
    """Leaves it to :func:`close` to tell of the token, which is the same at every address."""

    def get_auth(self) -> list[dict[str, Any]]:
        """Return nothing."""
        return []


def close(result: dict[str, Any], **kwargs: Any) -> dict[str, Any]:
    """Finish the document: tell of refusals and of the token, and leave nothing without bounds."""
    components = result.setdefault("components", {})
    for shape in components.get("schemas", {}).values():
        if shape.get("type") == "object":
            shape.setdefault("additionalProperties", False)
    components["securitySchemes"] = {"token": {"type": "http", "scheme": "bearer"}}
    for path, methods in result["paths"].items():
        if "/commons/" in path:
            for method in _METHODS:
                if method in methods:
                    _tell(methods[method], method)
    return result


def _tell(operation: dict[str, Any], method: str) -> None:
    parameters = operation.get("parameters", [])
    for parameter in parameters:
        if parameter["in"] == "path" and parameter["name"] in ("slug", "season"):
            parameter["schema"] |= _NAME
    codes = REFUSALS + (WRITING if method == "post" else ())
    if any(parameter["name"] == "If-Match" for parameter in parameters):
        codes += EDITING
    operation["security"] = [{"token": []}]
    operation["responses"] |= {
        str(code): {
            "description": "Refused; the document says why.",
            "content": {
                problems.MEDIA_TYPE: {"schema": {"$ref": "#/components/schemas/ProblemOut"}}
            },
        }
        for code in codes
    }
