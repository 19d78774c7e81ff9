"""What the record holds of a run: method states, iterates, costs and endings as content, exact to the bit.

Content is text, lists and objects of these, and whole numbers below 2^53. A field that is None is left out. A state is
any frozen dataclass whose fields are Real, int, bool, str, None, Point, or tuples of these: its codec is made once from
its annotations, so a new method brings no codec of its own.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, fields
from functools import cache
from types import NoneType, UnionType
from typing import Any, TypeAlias, Union, get_args, get_origin, get_type_hints

from surefoot.equation.arithmetic import Arithmetic
from surefoot.equation.results import Failure, FailureKind, Real
from surefoot.errors import RecordError
from surefoot.methods.contract import (
    Account,
    Ending,
    Iterate,
    Limited,
    Method,
    Outcome,
    Point,
    Spent,
    State,
    Verdict,
)

Content: TypeAlias = Mapping[str, Any]
_Encode: TypeAlias = Callable[[Real], str]
_Decode: TypeAlias = Callable[[str], Real]
_Write: TypeAlias = Callable[[Any, _Encode], object]
_Read: TypeAlias = Callable[[Any, _Decode], Any]

_OUTCOMES = frozenset(get_args(Outcome))
_MALFORMED = (KeyError, IndexError, TypeError, ValueError, AttributeError)


@dataclass(frozen=True, slots=True)
class _Field:
    """How a field of a state is written and read; one that may be None is left out where it is."""

    name: str
    write: _Write
    read: _Read
    optional: bool


def encode_state(state: State, arithmetic: Arithmetic) -> dict[str, object]:
    """A method's state as content."""
    encode = arithmetic.encode
    state_type: Any = type(state)
    content: dict[str, object] = {}
    for field in _fields_of(state_type):
        value = getattr(state, field.name)
        if value is not None:
            content[field.name] = field.write(value, encode)
    return content


def decode_state(method: Method, content: Content, arithmetic: Arithmetic) -> State:
    """The inverse of `encode_state`. Raises RecordError for content that is no state of the method."""
    decode = arithmetic.decode
    state_type: Any = method.state_type
    values: list[Any] = []
    left = len(content)
    try:
        for field in _fields_of(state_type):
            if field.optional and field.name not in content:
                values.append(None)
            else:
                values.append(field.read(content[field.name], decode))
                left -= 1
    except _MALFORMED as error:
        raise RecordError(f"not a state of {method.traits.code}: {error}") from error
    if left:
        raise RecordError(f"not a state of {method.traits.code}: it holds {', '.join(content)}")
    return state_type(*values)


@cache
def _fields_of(state_type: Any) -> tuple[_Field, ...]:
    hints = get_type_hints(state_type)
    return tuple(_field(field.name, hints[field.name]) for field in fields(state_type))


def _field(name: str, hint: Any) -> _Field:
    if get_origin(hint) in (UnionType, Union):
        (inner,) = (member for member in get_args(hint) if member is not NoneType)
        return _Field(name, *_codec_of(inner), optional=True)
    return _Field(name, *_codec_of(hint), optional=False)


def _codec_of(hint: Any) -> tuple[_Write, _Read]:
    if hint in _PLAIN:
        return _PLAIN[hint]
    if get_origin(hint) is tuple:
        return _tuple_codec(get_args(hint))
    raise TypeError(f"a state cannot hold {hint}")


def _tuple_codec(members: tuple[Any, ...]) -> tuple[_Write, _Read]:
    if len(members) == 2 and members[1] is Ellipsis:
        write, read = _codec_of(members[0])
        return (
            lambda items, encode: [write(item, encode) for item in items],
            lambda items, decode: tuple([read(item, decode) for item in items]),
        )
    codecs = [_codec_of(member) for member in members]
    return (
        lambda items, encode: [codec[0](item, encode) for codec, item in zip(codecs, items, strict=True)],
        lambda items, decode: tuple([codec[1](item, decode) for codec, item in zip(codecs, items, strict=True)]),
    )


def _read_whole(content: Any, _: _Decode) -> int:
    if type(content) is not int:
        raise TypeError(f"{content!r} is no whole number")
    return content


def _read_flag(content: Any, _: _Decode) -> bool:
    if content not in ("yes", "no"):
        raise ValueError(f'{content!r} is neither "yes" nor "no"')
    return bool(content == "yes")


def _read_text(content: Any, _: _Decode) -> str:
    if type(content) is not str:
        raise TypeError(f"{content!r} is no text")
    return content


def _read_point(content: Any, decode: _Decode) -> Point:
    x, f = content
    return Point(decode(x), decode(f))


_PLAIN: Mapping[Any, tuple[_Write, _Read]] = {
    float: (lambda value, encode: encode(value), lambda content, decode: decode(content)),
    int: (lambda value, _: value, _read_whole),
    bool: (lambda value, _: "yes" if value else "no", _read_flag),
    str: (lambda value, _: value, _read_text),
    Point: (lambda point, encode: [encode(point.x), encode(point.f)], _read_point),
}


def encode_iterate(iterate: Iterate, arithmetic: Arithmetic) -> dict[str, object]:
    """An iterate as content: `failure` stands in the place of `f` where there is no value."""
    encode = arithmetic.encode
    content: dict[str, object] = {"k": iterate.k, "x": encode(iterate.x)}
    if isinstance(iterate.f, Failure):
        content["failure"] = _encode_failure(iterate.f)
    else:
        content["f"] = encode(iterate.f)
    if iterate.raw is not None:
        content["raw"] = encode(iterate.raw)
    if iterate.account is not None:
        content["account"] = _encode_account(iterate.account, encode)
    if iterate.limited:
        content["limited"] = [[flag.stage, encode(flag.before), encode(flag.after)] for flag in iterate.limited]
    if iterate.put:
        content["put"] = iterate.put
    return content


def decode_iterate(content: Content, arithmetic: Arithmetic) -> Iterate:
    """The inverse of `encode_iterate`. Raises RecordError for content that is no iterate."""
    decode = arithmetic.decode
    try:
        failure = content.get("failure")
        raw = content.get("raw")
        account = content.get("account")
        limited = content.get("limited", ())
        x = decode(content["x"])
        return Iterate(
            _read_whole(content["k"], decode),
            x,
            decode(content["f"]) if failure is None else _decode_failure(failure),
            None if raw is None else x if raw == content["x"] else decode(raw),
            None if account is None else _decode_account(account, decode),
            tuple([Limited(stage, decode(before), decode(after)) for stage, before, after in limited]),
            _read_text(content.get("put", ""), decode),
        )
    except _MALFORMED as error:
        raise RecordError(f"not an iterate: {error}") from error


def _encode_failure(failure: Failure) -> dict[str, object]:
    return {
        "kind": str(failure.kind),
        "subexpression": failure.subexpression,
        "arguments": list(failure.arguments),
        "definition": failure.definition,
    }


def _decode_failure(content: Content) -> Failure:
    kind, subexpression, arguments, definition = (
        content[key] for key in ("kind", "subexpression", "arguments", "definition")
    )
    return Failure(FailureKind(kind), subexpression, tuple(arguments), definition)


def _encode_account(account: Account, encode: _Encode) -> dict[str, object]:
    content: dict[str, object] = {
        "shape": account.shape,
        "points": [[encode(point.x), encode(point.f)] for point in account.points],
    }
    if account.slope is not None:
        content["slope"] = encode(account.slope)
    if account.figures:
        content["figures"] = [[name, encode(value)] for name, value in account.figures]
    if account.step is not None:
        content["step"] = encode(account.step)
    return content


def _decode_account(content: Content, decode: _Decode) -> Account:
    slope = content.get("slope")
    step = content.get("step")
    return Account(
        content["shape"],
        tuple([Point(decode(x), decode(f)) for x, f in content["points"]]),
        None if slope is None else decode(slope),
        tuple([(name, decode(value)) for name, value in content.get("figures", ())]),
        None if step is None else decode(step),
    )


def encode_spent(spent: Spent) -> dict[str, object]:
    """Evaluations made, as content; what was not evaluated is left out."""
    counts = {"f": spent.f, "derivative": spent.derivative, "g": spent.g}
    return {name: count for name, count in counts.items() if count}


def decode_spent(content: Content) -> Spent:
    """The inverse of `encode_spent`. Raises RecordError for content that is no count of evaluations."""
    try:
        spent = Spent(**content)
    except TypeError as error:
        raise RecordError(f"not a count of evaluations: {error}") from error
    if any(type(count) is not int or count < 0 for count in (spent.f, spent.derivative, spent.g)):
        raise RecordError(f"not a count of evaluations: {content}")
    return spent


def encode_ending(ending: Ending, arithmetic: Arithmetic) -> dict[str, object]:
    """How a run ended, as content."""
    encode = arithmetic.encode
    content: dict[str, object] = {"outcome": ending.outcome, "says": ending.says}
    if ending.verdict is not None:
        sides = [[name, encode(left), encode(right)] for name, left, right in ending.verdict.sides]
        content["verdict"] = {"test": ending.verdict.test, "sides": sides}
    if ending.account is not None:
        content["account"] = _encode_account(ending.account, encode)
    return content


def decode_ending(content: Content, arithmetic: Arithmetic) -> Ending:
    """The inverse of `encode_ending`. Raises RecordError for content that is no ending."""
    decode = arithmetic.decode
    try:
        verdict = content.get("verdict")
        account = content.get("account")
        if content["outcome"] not in _OUTCOMES:
            raise RecordError(f"not an ending: there is no outcome {content['outcome']!r}")
        return Ending(
            content["outcome"],
            None if verdict is None else _decode_verdict(verdict, decode),
            _read_text(content["says"], decode),
            None if account is None else _decode_account(account, decode),
        )
    except _MALFORMED as error:
        raise RecordError(f"not an ending: {error}") from error


def _decode_verdict(content: Content, decode: _Decode) -> Verdict:
    sides = tuple([(name, decode(left), decode(right)) for name, left, right in content["sides"]])
    return Verdict(content["test"], sides)
