"""The gate: tables that know their keys, and how a refusal becomes one message.

Models hold SI numbers and resolved objects. They are made in two ways: in
Python by attribute names, or from a file by the keys that users type
(aliases), with texts for quantities and names for materials. The second way
is told by the validation context, which carries what names are looked up in.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping
from typing import Any

from pydantic import BaseModel, ConfigDict, ValidationError, ValidationInfo, model_validator
from pydantic.fields import FieldInfo

from tcopt.errors import InputError
from tcopt.study.fields import refusal
from tcopt.units import shown

__all__ = ["INTERNAL", "Model", "quoted", "refused_input"]

INTERNAL = "\0"
"""First character of the alias of a field that the loader fills in and no file can name."""

_PLAIN_KEY = re.compile(r"[A-Za-z0-9_-]+")


def _key(field_name: str, field: FieldInfo, from_file: bool) -> str:
    return str(field.validation_alias or field_name) if from_file else field_name


class Model(BaseModel):
    """A frozen table that takes the keys it knows and no others."""

    model_config = ConfigDict(
        frozen=True,
        extra="forbid",
        validate_by_name=True,
        validate_by_alias=False,
    )

    @model_validator(mode="before")
    @classmethod
    def _keys_known_and_complete(cls, data: Any, info: ValidationInfo) -> Any:
        if isinstance(data, cls):
            return data
        from_file = info.context is not None
        fields = {_key(name, field, from_file): field for name, field in cls.model_fields.items()}
        accepted = ", ".join(key for key in fields if not key.startswith(INTERNAL))
        if not isinstance(data, Mapping):
            raise refusal(shown(data), f"a table with the keys {accepted}")
        for key in data:
            if key not in fields:
                raise refusal("an unknown key", accepted, quoted(str(key)))
        for key, field in fields.items():
            if field.is_required() and key not in data:
                said = (getattr(each, "accepted", None) for each in field.metadata)
                wanted = next((each for each in said if each), field.description or "this key")
                raise refusal("nothing", wanted, quoted(key))
        return data


def quoted(key: str) -> str:
    """Return a key as TOML writes it: bare where it can be."""
    return key if _PLAIN_KEY.fullmatch(key) else shown(key)


_SHAPES = {
    "model_type": "a table",
    "dict_type": "a table",
    "tuple_type": "a list",
    "list_type": "a list",
    "string_type": "text",
}


def _one(error: Any, tags: frozenset[str], renamed: Callable[[str], str]) -> str:
    context = error.get("ctx", {})
    path = ""
    for part in error["loc"]:
        if isinstance(part, int):
            path += f"[{part}]"
        elif part not in tags and not part.startswith(INTERNAL):
            path += f".{quoted(part)}"
    key = context.get("key", "") if error["type"] == "refused" else ""
    path += key if key.startswith("[") else f".{key}" if key else ""
    if error["type"] == "refused":
        found, accepted = context["found"], context["accepted"]
    else:
        found = shown(error["input"])
        accepted = _SHAPES.get(error["type"], error["msg"])
    where = f"{renamed(path.lstrip('.'))}: " if path else ""
    return f"{where}found {found}; accepted: {accepted}"


def refused_input(
    where: str,
    error: ValidationError,
    tags: frozenset[str] = frozenset(),
    renamed: Callable[[str], str] = str,
) -> InputError:
    """Return the project's error for pydantic's: the first problem, and how many more.

    ``tags`` are the names by which pydantic tells union members apart; they
    stand in no file. ``renamed`` turns a key into how it stands in the file.
    """
    problems = error.errors(include_url=False)
    more = f" (and {len(problems) - 1} more)" if len(problems) > 1 else ""
    return InputError(f"{where}: {_one(problems[0], tags, renamed)}{more}")
