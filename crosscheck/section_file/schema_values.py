"""Forms of single values in a section file, as types with a check and a JSON Schema: numbers, names, places.

A number is a number or arithmetic in quotes; text is printable and on one line.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Annotated, Any

from pydantic import Discriminator, Field, PlainValidator, Tag, WithJsonSchema
from pydantic_core import PydanticCustomError

from crosscheck.section_file.arithmetic import ALLOWED

# Tags of unions turn up in error locations; a key of a file cannot look like one of these.
ONE, LIST, TABLE, TEXT = "\x1fone", "\x1flist", "\x1ftable", "\x1ftext"
# TOML has no null: a key that may be left out is absent, never None, whatever its type.
ABSENT: Any = None
UNION_TAGS = (ONE, LIST, TABLE, TEXT)


def _refuse(allowed: str) -> PydanticCustomError:
    return PydanticCustomError("refused", "must be {allowed}", {"allowed": allowed})


def _number(value: Any) -> Any:
    if isinstance(value, bool) or not isinstance(value, (int, float, str)):
        raise _refuse(ALLOWED)
    if isinstance(value, float) and not math.isfinite(value):
        raise _refuse("a finite number")
    return value


def _printable(limit: int) -> Callable[[Any], Any]:
    def check(value: Any) -> Any:
        if not isinstance(value, str):
            raise _refuse("text in quotes")
        if not value.isprintable() or len(value) > limit or not value.strip() or value != value.strip():
            raise _refuse(f"1 to {limit} printable characters on one line, no space at either end")
        return value

    return check


def choice(*allowed: Any) -> Callable[[Any], Any]:
    text = " or ".join(f'"{each}"' if isinstance(each, str) else str(each) for each in allowed)

    def check(value: Any) -> Any:
        if isinstance(value, bool) or type(value) is not type(allowed[0]) or value not in allowed:
            raise _refuse(text)
        return value

    return check


def _flag(value: Any) -> Any:
    if not isinstance(value, bool):
        raise _refuse("true or false")
    return value


def _count(value: Any) -> Any:
    if isinstance(value, bool) or not isinstance(value, int) or not 1 <= value <= 1000:
        raise _refuse("a whole number from 1 to 1000")
    return value


def form(value: Any) -> str:
    if isinstance(value, list):
        return LIST
    return TABLE if isinstance(value, dict) else ONE


def list_or_text(value: Any) -> str:
    return LIST if isinstance(value, list) else TEXT


def choice_schema(*allowed: Any) -> WithJsonSchema:
    return WithJsonSchema({"enum": list(allowed)})


Number = Annotated[Any, PlainValidator(_number), WithJsonSchema({"type": ["number", "string"]})]
Name = Annotated[
    Any, PlainValidator(_printable(60)), WithJsonSchema({"type": "string", "minLength": 1, "maxLength": 60})
]
Text = Annotated[
    Any, PlainValidator(_printable(200)), WithJsonSchema({"type": "string", "minLength": 1, "maxLength": 200})
]
LongText = Annotated[
    Any,
    PlainValidator(_printable(2000)),
    WithJsonSchema({"type": "string", "minLength": 1, "maxLength": 2000}),
]
Flag = Annotated[Any, PlainValidator(_flag), WithJsonSchema({"type": "boolean"})]
Count = Annotated[
    Any, PlainValidator(_count), WithJsonSchema({"type": "integer", "minimum": 1, "maximum": 1000})
]
Sides = Annotated[Any, PlainValidator(choice("both", "theory", "fe")), choice_schema("both", "theory", "fe")]
Level = Annotated[
    Any,
    PlainValidator(choice("midline", "corrected", "lumped")),
    choice_schema("midline", "corrected", "lumped"),
]
AxisDirection = Annotated[
    Any, PlainValidator(choice("+x", "-x", "+y", "-y")), choice_schema("+x", "-x", "+y", "-y")
]
Pair = Annotated[list[Number], Field(min_length=2, max_length=2)]
PlaceOrName = Annotated[Annotated[Pair, Tag(LIST)] | Annotated[Name, Tag(TEXT)], Discriminator(list_or_text)]
NameOrList = Annotated[
    Annotated[Name, Tag(TEXT)] | Annotated[list[Name], Field(min_length=1), Tag(LIST)],
    Discriminator(list_or_text),
]
NumberOrList = Annotated[
    Annotated[Number, Tag(ONE)] | Annotated[list[Number], Field(min_length=1), Tag(LIST)],
    Discriminator(lambda value: LIST if isinstance(value, list) else ONE),
]
