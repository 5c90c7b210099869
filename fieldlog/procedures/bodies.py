"""Bodies from JSON, and what follows from their types: fields with labels and JSON schema."""

from __future__ import annotations

import dataclasses
import re
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any, Literal, get_args, get_origin, get_type_hints

import msgspec

from fieldlog.errors import InputError
from fieldlog.procedures.catalogue import PROCEDURES
from fieldlog.procedures.limits import limit_problems, limits_of, metas_of
from fieldlog.procedures.procedure import Problem
from fieldlog.procedures.shape_words import shape_refusal


@dataclass(frozen=True, slots=True)
class Field:
    """One field of a body type, as a form, a column or a report row needs it."""

    name: str
    label: str
    hint: str
    type: Any
    is_required: bool
    choices: tuple[str, ...] = ()
    limits: Mapping[str, str] = dataclasses.field(default_factory=dict)  # least, above, most, shortest, longest


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
        raise shape_refusal(error, "body", lambda path: _choices_at(procedure.body, path)) from error
    # Cross-checks compare days and times, so these must be ones.
    problems = limit_problems(typed) or procedure.check(typed)
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


def _refusal(problems: list[Problem]) -> InputError:
    first = problems[0]
    said = "; ".join(f"{problem.field}: {problem.message}" for problem in problems)
    return InputError(said, field=f"body.{first.field}")


def _field(info: msgspec.structs.FieldInfo, hint: Any) -> Field:  # noqa: ANN401  a type annotation of any shape
    metas, bare = metas_of(hint)
    title = next((meta.title for meta in metas if meta.title), info.name.replace("_", " "))
    described = next((meta.description for meta in metas if meta.description), "")
    return Field(info.name, title, described, bare, info.required, _choices(bare), limits_of(metas, bare))


def _choices(bare: Any) -> tuple[str, ...]:  # noqa: ANN401
    return get_args(bare) if get_origin(bare) is Literal else ()


def _choices_at(body_type: type[msgspec.Struct], path: str) -> tuple[str, ...]:
    """Return what may be chosen at a dotted path of a body; nothing where the path leads to no choice."""
    bare: Any = body_type
    for name in re.sub(r"\[[^\]]*\]", "", path).split("."):
        if not (isinstance(bare, type) and issubclass(bare, msgspec.Struct)):
            return ()
        hints = get_type_hints(bare, include_extras=True)
        found = {info.encode_name: hints[info.name] for info in msgspec.structs.fields(bare)}
        _, bare = metas_of(found.get(name))
        if get_origin(bare) is tuple:
            _, bare = metas_of(get_args(bare)[0])
    return tuple(str(choice) for choice in _choices(bare))
