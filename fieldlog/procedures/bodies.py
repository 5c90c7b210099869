"""Bodies from JSON, and what follows from their types: fields with labels and JSON schema."""

from __future__ import annotations

import types
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Annotated, Any, Literal, Union, get_args, get_origin, get_type_hints

import msgspec

from fieldlog.errors import InputError
from fieldlog.procedures.catalogue import PROCEDURES
from fieldlog.procedures.envelope import shape_error
from fieldlog.procedures.procedure import Problem


@dataclass(frozen=True, slots=True)
class Field:
    """One field of a body type, as a form, a column or a report row needs it."""

    name: str
    label: str
    hint: str
    type: Any
    is_required: bool
    choices: tuple[str, ...] = ()


def decode_body(kind: str, body: Mapping[str, Any]) -> msgspec.Struct:
    """Return the typed body of a kind.

    Raises
    ------
    InputError
        If a field is unknown, of the wrong type, outside its limits, or at odds with another; names it and the
        mend.
    """
    procedure = PROCEDURES[kind]
    try:
        typed = msgspec.convert(body, procedure.body)
    except msgspec.ValidationError as error:
        refused = shape_error(error)
        raise InputError(f"body.{refused.message}", field=_inside(refused.field)) from error
    problems = procedure.check(typed)
    if problems:
        raise _refusal(problems)
    return typed


def plain_body(body: msgspec.Struct) -> dict[str, Any]:
    """Return the body as plain JSON values, absent ones left out."""
    plain: dict[str, Any] = msgspec.to_builtins(body)
    return plain


def fields(body_type: type[msgspec.Struct]) -> list[Field]:
    """Return the fields of a body type in the order of the work."""
    hints = get_type_hints(body_type, include_extras=True)
    return [_field(info, hints[info.name]) for info in msgspec.structs.fields(body_type)]


def json_schema(kind: str) -> dict[str, Any]:
    """Return the JSON schema of a kind's body."""
    return msgspec.json.schema(PROCEDURES[kind].body)


def _inside(field: str) -> str:
    return f"body.{field}" if field else "body"


def _refusal(problems: list[Problem]) -> InputError:
    first = problems[0]
    said = "; ".join(f"{problem.field}: {problem.message}" for problem in problems)
    return InputError(said, field=f"body.{first.field}")


def _field(info: msgspec.structs.FieldInfo, hint: Any) -> Field:  # noqa: ANN401  a type annotation of any shape
    metas, bare = _metas(hint)
    title = next((meta.title for meta in metas if meta.title), info.name.replace("_", " "))
    described = next((meta.description for meta in metas if meta.description), "")
    return Field(info.name, title, described, bare, info.required, _choices(bare))


def _metas(hint: Any) -> tuple[list[msgspec.Meta], Any]:  # noqa: ANN401
    if get_origin(hint) is Annotated:
        inner, *found = get_args(hint)
        deeper, bare = _metas(inner)
        return [meta for meta in found if isinstance(meta, msgspec.Meta)] + deeper, bare
    if get_origin(hint) in {Union, types.UnionType}:
        options = [option for option in get_args(hint) if option is not type(None)]
        if len(options) == 1:
            return _metas(options[0])
    return [], hint


def _choices(bare: Any) -> tuple[str, ...]:  # noqa: ANN401
    return get_args(bare) if get_origin(bare) is Literal else ()
