"""The codec between what happened and the content of an event in the record.

Content is objects, lists, texts and whole numbers; the numbers of a run are texts in the arithmetic of that run, so
reading an event needs the state before it: which run is in hand, under which method and arithmetic.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

from surefoot.equation.problem_content import (
    derivative_from_content,
    derivative_to_content,
    problem_from_content,
    problem_to_content,
)
from surefoot.errors import RecordError, SurefootError
from surefoot.methods.contract import Ending, Spent, State
from surefoot.methods.plan_table import plan_from_table, plan_to_table
from surefoot.methods.states import (
    decode_ending,
    decode_iterate,
    decode_spent,
    decode_state,
    encode_ending,
    encode_iterate,
    encode_spent,
    encode_state,
)
from surefoot.session.canonical import Json
from surefoot.session.entry import Entry
from surefoot.session.environment import environment_from_content, environment_to_content
from surefoot.session.events import (
    Event,
    Happening,
    IteratePut,
    NoteMade,
    ProblemStated,
    RunAbandoned,
    RunBegun,
    RunTakenUp,
    SessionOpened,
    SessionResumed,
    StepTaken,
    Withdrawn,
)
from surefoot.session.state import SessionState
from surefoot.session.tools import Tools, tools_for, tools_of


def content_of(what: Happening, before: SessionState) -> dict[str, Json]:
    """The content of an event, to be recorded after the state `before`."""
    return _CODECS[type(what)].write(what, before)


def event_of(entry: Entry, before: SessionState) -> Event:
    """What an entry of the file says happened.

    Raises:
        RecordError: the kind is unknown, or the content is not that of its kind; it carries the event's number.
    """
    codec = _BY_KIND.get(entry.kind)
    if codec is None:
        raise RecordError(
            f"has the kind {entry.kind!r}, which a newer surefoot wrote; open it with that", event=entry.n
        )
    try:
        what = codec.read(entry.content, before)
    except SurefootError as error:
        message = error.message if isinstance(error, RecordError) else str(error)
        raise RecordError(f"{entry.kind}: {message}", event=entry.n) from error
    return Event(entry.n, entry.at, entry.by, what, entry.prev, entry.hash)


# -- the codec of each kind --------------------------------------------------------------------------------------------


@dataclass(frozen=True, slots=True)
class _Codec:
    write: Callable[[Any, SessionState], dict[str, Json]]
    read: Callable[[Mapping[str, Json], SessionState], Happening]


def _members(content: Mapping[str, Json], required: tuple[str, ...], optional: tuple[str, ...] = ()) -> None:
    for name in required:
        if name not in content:
            raise RecordError(f"member {name!r} is missing")
    if len(content) > len(required):
        for name in content:
            if name not in required and name not in optional:
                raise RecordError(f"member {name!r} is unknown")


def _text(content: Mapping[str, Json], name: str) -> str:
    value = content[name]
    if not isinstance(value, str):
        raise RecordError(f"member {name!r} must be a text")
    return value


def _texts(content: Mapping[str, Json], name: str) -> tuple[str, ...]:
    value = content.get(name, [])
    if not isinstance(value, list) or not all(isinstance(item, str) for item in value):
        raise RecordError(f"member {name!r} must be a list of texts")
    return tuple(value)


def _count(value: Json, name: str, least: int = 1) -> int:
    if type(value) is not int or value < least:
        raise RecordError(f"member {name!r} must be a whole number from {least}")
    return value


def _object(value: Json, name: str) -> dict[str, Json]:
    if not isinstance(value, dict):
        raise RecordError(f"member {name!r} must be an object")
    return value


def _list(content: Mapping[str, Json], name: str) -> list[Json]:
    value = content[name]
    if not isinstance(value, list):
        raise RecordError(f"member {name!r} must be a list")
    return value


def _hand(before: SessionState) -> Tools:
    run = before.run
    if run is None:
        raise RecordError("there is no run in hand")
    return tools_of(run)


def _write_opened(what: SessionOpened, _: SessionState) -> dict[str, Json]:
    return {
        "title": what.title,
        "account": what.account,
        "host": what.host,
        "environment": environment_to_content(what.environment),
    }


def _read_opened(content: Mapping[str, Json], _: SessionState) -> SessionOpened:
    _members(content, ("title", "account", "host", "environment"))
    environment = environment_from_content(content["environment"])
    return SessionOpened(_text(content, "title"), _text(content, "account"), _text(content, "host"), environment)


def _write_resumed(what: SessionResumed, _: SessionState) -> dict[str, Json]:
    content: dict[str, Json] = {"account": what.account, "host": what.host}
    if what.environment is not None:
        content["environment"] = environment_to_content(what.environment)
    return content


def _read_resumed(content: Mapping[str, Json], _: SessionState) -> SessionResumed:
    _members(content, ("account", "host"), ("environment",))
    changed = environment_from_content(content["environment"]) if "environment" in content else None
    return SessionResumed(_text(content, "account"), _text(content, "host"), changed)


def _write_stated(what: ProblemStated, _: SessionState) -> dict[str, Json]:
    content: dict[str, Json] = {
        "number": what.number,
        "problem": problem_to_content(what.problem),
        "derivatives": [derivative_to_content(derivative) for derivative in what.derivatives],
    }
    if what.readings:
        content["readings"] = list(what.readings)
    return content


def _read_stated(content: Mapping[str, Json], _: SessionState) -> ProblemStated:
    _members(content, ("number", "problem", "derivatives"), ("readings",))
    return ProblemStated(
        _count(content["number"], "number"),
        problem_from_content(content["problem"]),
        tuple(derivative_from_content(item) for item in _list(content, "derivatives")),
        _texts(content, "readings"),
    )


def _write_begun(what: RunBegun, _: SessionState) -> dict[str, Json]:
    tools = tools_for(what.plan.method, what.plan.arithmetic)
    content: dict[str, Json] = {
        "number": what.number,
        "problem": what.problem,
        "plan": plan_to_table(what.plan),
        "revision": what.revision,
        "iterates": [encode_iterate(iterate, tools.arithmetic) for iterate in what.iterates],
        **_write_outcome(what, tools),
    }
    if what.parent is not None:
        content["parent"] = list(what.parent)
    if what.readings:
        content["readings"] = list(what.readings)
    return content


def _read_begun(content: Mapping[str, Json], _: SessionState) -> RunBegun:
    _members(
        content,
        ("number", "problem", "plan", "revision", "iterates", "spent"),
        ("state", "ending", "parent", "readings"),
    )
    plan = plan_from_table(_object(content["plan"], "plan"))
    tools = tools_for(plan.method, plan.arithmetic)
    state, spent, ending = _read_outcome(content, tools)
    return RunBegun(
        _count(content["number"], "number"),
        _count(content["problem"], "problem"),
        plan,
        _count(content["revision"], "revision"),
        tuple(decode_iterate(_object(item, "iterates"), tools.reading) for item in _list(content, "iterates")),
        state,
        spent,
        ending,
        _read_parent(content),
        _texts(content, "readings"),
    )


def _read_parent(content: Mapping[str, Json]) -> tuple[int, int] | None:
    if "parent" not in content:
        return None
    pair = _list(content, "parent")
    if len(pair) != 2:
        raise RecordError("member 'parent' must be a run and a k")
    return _count(pair[0], "parent"), _count(pair[1], "parent", 0)


def _write_outcome(what: RunBegun | StepTaken | IteratePut, tools: Tools) -> dict[str, Json]:
    content: dict[str, Json] = {"spent": encode_spent(what.spent)}
    if what.state is not None:
        content["state"] = encode_state(what.state, tools.arithmetic)
    if what.ending is not None:
        content["ending"] = encode_ending(what.ending, tools.arithmetic)
    return content


def _read_outcome(content: Mapping[str, Json], tools: Tools) -> tuple[State | None, Spent, Ending | None]:
    state, ending = content.get("state"), content.get("ending")
    return (
        None if state is None else decode_state(tools.method, _object(state, "state"), tools.reading),
        decode_spent(_object(content["spent"], "spent")),
        None if ending is None else decode_ending(_object(ending, "ending"), tools.reading),
    )


def _write_step(what: StepTaken, before: SessionState) -> dict[str, Json]:
    tools = _hand(before)
    content = _write_outcome(what, tools)
    if what.iterate is not None:
        content["iterate"] = encode_iterate(what.iterate, tools.arithmetic)
    return content


def _read_step(content: Mapping[str, Json], before: SessionState) -> StepTaken:
    _members(content, ("spent",), ("iterate", "state", "ending"))
    tools = _hand(before)
    iterate = content.get("iterate")
    return StepTaken(
        None if iterate is None else decode_iterate(_object(iterate, "iterate"), tools.reading),
        *_read_outcome(content, tools),
    )


def _write_put(what: IteratePut, before: SessionState) -> dict[str, Json]:
    tools = _hand(before)
    return {**_write_outcome(what, tools), "iterate": encode_iterate(what.iterate, tools.arithmetic)}


def _read_put(content: Mapping[str, Json], before: SessionState) -> IteratePut:
    _members(content, ("iterate", "spent"), ("state", "ending"))
    tools = _hand(before)
    iterate = decode_iterate(_object(content["iterate"], "iterate"), tools.reading)
    return IteratePut(iterate, *_read_outcome(content, tools))


def _read_taken_up(content: Mapping[str, Json], _: SessionState) -> RunTakenUp:
    _members(content, ("run",))
    return RunTakenUp(_count(content["run"], "run"))


def _read_abandoned(content: Mapping[str, Json], _: SessionState) -> RunAbandoned:
    _members(content, ("reason",))
    return RunAbandoned(_text(content, "reason"))


def _read_withdrawn(content: Mapping[str, Json], _: SessionState) -> Withdrawn:
    _members(content, ("of",))
    return Withdrawn(_count(content["of"], "of"))


def _read_note(content: Mapping[str, Json], _: SessionState) -> NoteMade:
    _members(content, ("text",))
    return NoteMade(_text(content, "text"))


_CODECS: Mapping[type[Happening], _Codec] = {
    SessionOpened: _Codec(_write_opened, _read_opened),
    SessionResumed: _Codec(_write_resumed, _read_resumed),
    ProblemStated: _Codec(_write_stated, _read_stated),
    RunBegun: _Codec(_write_begun, _read_begun),
    StepTaken: _Codec(_write_step, _read_step),
    IteratePut: _Codec(_write_put, _read_put),
    RunTakenUp: _Codec(lambda what, _: {"run": what.run}, _read_taken_up),
    RunAbandoned: _Codec(lambda what, _: {"reason": what.reason}, _read_abandoned),
    Withdrawn: _Codec(lambda what, _: {"of": what.of}, _read_withdrawn),
    NoteMade: _Codec(lambda what, _: {"text": what.text}, _read_note),
}
_BY_KIND: Mapping[str, _Codec] = {happening.kind: codec for happening, codec in _CODECS.items()}
