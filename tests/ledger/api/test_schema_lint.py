"""The OpenAPI document: valid, bounded on every side, and honest about refusals."""

import json
from collections.abc import Iterator
from typing import Any

import pytest
from django.core.management import call_command
from django.test import Client


@pytest.fixture(scope="module")
def document() -> dict[str, Any]:
    """The document as it is served."""
    found: dict[str, Any] = json.loads(Client().get("/api/v1/schema").content)
    return found


def _shapes(node: Any, path: str = "") -> Iterator[tuple[str, dict[str, Any]]]:
    """Yield every part of the document that says of which type it is, with its place."""
    if isinstance(node, dict):
        if "type" in node and isinstance(node["type"], str | list):
            yield path, node
        for name, inner in node.items():
            if name != "example":
                yield from _shapes(inner, f"{path}/{name}")
    elif isinstance(node, list):
        for place, inner in enumerate(node):
            yield from _shapes(inner, f"{path}/{place}")


def _of_type(document: dict[str, Any], kind: str) -> list[tuple[str, dict[str, Any]]]:
    found = []
    for path, shape in _shapes({"paths": document["paths"], **document["components"]}):
        kinds = shape["type"] if isinstance(shape["type"], list) else [shape["type"]]
        if kind in kinds and "securitySchemes" not in path:
            found.append((path, shape))
    return found


def test_the_document_validates_without_a_warning(tmp_path: Any) -> None:
    """As OpenAPI 3.1, by the validator of the schema library."""
    file = tmp_path / "schema.json"
    call_command(
        "spectacular", validate=True, fail_on_warn=True, format="openapi-json", file=str(file)
    )
    assert json.loads(file.read_text())["openapi"].startswith("3.1")


def test_every_number_is_bounded(document: dict[str, Any]) -> None:
    """From below and from above."""
    unbounded = [
        path
        for path, shape in _of_type(document, "integer")
        if not {"minimum", "maximum"} <= set(shape)
    ]
    assert unbounded == []


def test_every_text_is_bounded(document: dict[str, Any]) -> None:
    """By its length, its values or its form."""
    bounds = {"maxLength", "enum", "pattern"}
    unbounded = [
        path
        for path, shape in _of_type(document, "string")
        if not bounds & set(shape) and shape.get("format") not in ("date", "date-time")
    ]
    assert unbounded == []


def test_every_list_is_bounded(document: dict[str, Any]) -> None:
    """By its length."""
    unbounded = [path for path, shape in _of_type(document, "array") if "maxItems" not in shape]
    assert unbounded == []


def test_every_object_names_its_fields(document: dict[str, Any]) -> None:
    """And takes no other, or says that it is free."""
    open_ones = [
        path for path, shape in _of_type(document, "object") if "additionalProperties" not in shape
    ]
    assert open_ones == []


def test_every_operation_tells_how_it_refuses(document: dict[str, Any]) -> None:
    """With problem documents, and with those that its method can meet."""
    for path, methods in document["paths"].items():
        if path == "/api/v1/schema":
            continue
        for method, operation in methods.items():
            answers = operation["responses"]
            wanted = {"400", "401", "403", "404", "405", "429"}
            if method == "post":
                wanted |= {"409", "415", "422"}
            assert wanted <= set(answers), (path, method)
            for code in wanted:
                assert list(answers[code]["content"]) == ["application/problem+json"]
