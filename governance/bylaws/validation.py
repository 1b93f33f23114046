"""Runs a shape over a piece of the tree and notes what it refuses, at its place in the text."""

from typing import TypeVar

from pydantic import TypeAdapter, ValidationError
from pydantic_core import ErrorDetails

from governance.bylaws import context, fields, shapes, spelling, tree
from governance.bylaws.problems import Problems

Shaped = TypeVar("Shaped", bound=shapes.Shape)

_NAME: TypeAdapter[str] = TypeAdapter(fields.Name)
# A shape notes these itself, where it can still tell a misspelt key from a missing one.
_NOTED_BY_THE_SHAPE = ("missing", "extra_forbidden")
_ACCEPTED_OF_TYPE = {
    "list_type": "a list",
    "dict_type": "a mapping",
    "union_tag_not_found": "a mapping with a 'kind'",
}


def validated(*, shape: type[Shaped], node: tree.Node, reading: context.Reading) -> Shaped | None:
    """Return the shape of a node, or None where its problems have been noted."""
    try:
        return shape.model_validate(node, context=reading)
    except ValidationError as error:
        _note(error, reading.problems)
        return None


def check_name(*, name: tree.Scalar, reading: context.Reading) -> None:
    """Note a key that should be a name and is none."""
    try:
        _NAME.validate_python(name, context=reading)
    except ValidationError as error:
        _note(error, reading.problems)


def _note(error: ValidationError, problems: Problems) -> None:
    for each in error.errors(include_url=False):
        if each["type"] in _NOTED_BY_THE_SHAPE:
            continue
        if each["type"] in ("union_tag_invalid", "union_tag_not_found") and isinstance(
            each["input"], tree.Mapping
        ):
            _note_kind(each, problems)
        else:
            _note_value(each, problems)


def _note_value(error: ErrorDetails, problems: Problems) -> None:
    facts, node = error.get("ctx", {}), error["input"]
    at = node.value(facts["at"]) if facts.get("at") and isinstance(node, tree.Mapping) else None
    place = node if at is None else at
    problems.add(
        at=place,
        found=facts.get("found") or tree.described(place),
        accepted=facts.get("accepted") or _ACCEPTED_OF_TYPE[error["type"]],
        nearest=facts.get("nearest"),
    )


def _note_kind(error: ErrorDetails, problems: Problems) -> None:
    node, tags = error["input"], str(error.get("ctx", {}).get("expected_tags", ""))
    kind = node.value("kind")
    if kind is None:
        problems.add(at=node, found="no 'kind'", accepted="a 'kind' in every such mapping")
        return
    problems.add(
        at=kind,
        found=f"the kind {tree.described(kind)}",
        accepted=f"one of {tags}" if tags else "a name",
        nearest=spelling.nearest(str(kind), [tag.strip("'") for tag in tags.split(", ")]),
    )
