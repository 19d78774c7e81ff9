"""The state of a session is the fold of its events: `apply` is pure, and total over the events that are allowed.

Every state links to the one before the last thing that can be withdrawn, so withdrawing costs the same at any length;
what must outlive a withdrawal (notes, numbers given out, who sits there and in which environment) is carried over.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping
from dataclasses import replace
from typing import Any

from surefoot.errors import RecordError
from surefoot.methods.contract import Ending, Iterate, Spent, State
from surefoot.session.commands import (
    Abandon,
    AddNote,
    BeginRun,
    BeginVariant,
    Command,
    PutIterate,
    StateProblem,
    TakeSteps,
    TakeUp,
    Withdraw,
)
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
from surefoot.session.state import Chain, Note, Phase, Run, SessionState, StatedProblem
from surefoot.session.transitions import refusal

EMPTY = SessionState()
"""The state before event 0."""


def fold(events: Iterable[Event]) -> SessionState:
    """The state that these events give, from event 0 on. Raises RecordError as `apply` does."""
    state = EMPTY
    for event in events:
        state = apply(state, event)
    return state


def apply(state: SessionState, event: Event) -> SessionState:
    """The state after one more event.

    Raises:
        RecordError: the event is not allowed in this state, or does not fit it; it carries the event's number.
    """
    what = event.what
    try:
        if event.n != state.events:
            raise RecordError(f"stands where event {state.events} belongs")
        if (event.n == 0) != (type(what) is SessionOpened):
            raise RecordError(f"{event.kind} cannot stand here: event 0 opens the session, and only event 0")
        command = _COMMAND_OF.get(type(what))
        if type(what) is RunBegun and what.parent is not None:
            command = BeginVariant
        refused = refusal(state, command) if command is not None else None
        if refused is not None:
            raise RecordError(f"{event.kind} is not allowed here: {refused.reason}")
        return _APPLY[type(what)](state, event, what)
    except RecordError as error:
        raise RecordError(error.message, event=event.n) from error


def _on(state: SessionState, event: Event, **changes: Any) -> SessionState:
    return replace(state, events=event.n + 1, changed_at=event.at, by=event.by, **changes)


def _with_run(state: SessionState, event: Event, undo: str, run: Run) -> SessionState:
    """The state with a new value of the run in hand.

    Every step comes here: written out, it takes a third of the time of `replace`.
    """
    if len(state.runs) == 1:
        runs: tuple[Run, ...] = (run,)
    else:
        runs = tuple(run if other.number == run.number else other for other in state.runs)
    return SessionState(
        "stepping" if run.ending is None else "ended",
        state.title,
        state.problems,
        runs,
        state.hand,
        state.notes,
        state,
        undo,
        event.n + 1,
        event.at,
        event.by,
        state.run_numbers,
        state.problem_numbers,
        state.environment,
    )


def _doing(state: SessionState, event: Event, undo: str, **changes: Any) -> SessionState:
    """As `_on`, for what can be withdrawn."""
    return _on(state, event, before=state, undo=undo, **changes)


def _opened(state: SessionState, event: Event, what: SessionOpened) -> SessionState:
    return _on(state, event, title=what.title, environment=what.environment)


def _resumed(state: SessionState, event: Event, what: SessionResumed) -> SessionState:
    return _on(state, event, environment=what.environment or state.environment)


def _stated(state: SessionState, event: Event, what: ProblemStated) -> SessionState:
    if what.number != state.problem_numbers + 1:
        raise RecordError(f"problem {what.number} is stated where problem {state.problem_numbers + 1} is due")
    stated = StatedProblem(what.number, what.problem, what.derivatives, what.readings)
    return _doing(
        state,
        event,
        f"problem {what.number}",
        phase="planning",
        title=what.problem.title or state.title,
        problems=(*state.problems, stated),
        problem_numbers=what.number,
        hand=None,
    )


def _begun(state: SessionState, event: Event, what: RunBegun) -> SessionState:
    if what.number != state.run_numbers + 1:
        raise RecordError(f"run {what.number} is begun where run {state.run_numbers + 1} is due")
    if not what.iterates:
        raise RecordError(f"run {what.number} has no iterate")
    for k, iterate in enumerate(what.iterates):
        _check_iterate(iterate, k, by_hand=False)
    _check_goes_on(what.state, what.ending)
    chain: Chain[Iterate] = Chain()
    for iterate in what.iterates:
        chain = chain.append(iterate)
    run = Run(
        number=what.number,
        plan=what.plan,
        stated=_problem_of(state, what),
        origin=what.iterates[0],
        iterates=chain,
        state=what.state,
        steps=0,
        spent=what.spent,
        ending=what.ending,
        parent=what.parent,
        readings=what.readings,
    )
    return _doing(
        state,
        event,
        f"run {what.number}",
        phase=_phase(run),
        runs=(*state.runs, run),
        run_numbers=what.number,
        hand=what.number,
    )


def _problem_of(state: SessionState, what: RunBegun) -> StatedProblem:
    """The problem that a run begins under: that in force, or that of the run it is a variant of."""
    if what.parent is None:
        expected = state.problems[-1]
    else:
        number, k = what.parent
        parent = _run(state, number)
        if k >= len(parent.iterates):
            raise RecordError(f"run {number} has no iterate {k} to begin a variant at")
        expected = parent.stated
    if what.problem != expected.number:
        raise RecordError(f"run {what.number} names problem {what.problem} where problem {expected.number} is due")
    return expected


def _stepped(state: SessionState, event: Event, what: StepTaken) -> SessionState:
    run = _in_hand(state)
    if what.iterate is None:
        _check_goes_on(what.state, what.ending)
        if what.state is not None:
            raise RecordError("a step without an iterate leaves the method's state as it was")
        return _with_run(state, event, "the end of the run", _ended(run, what))
    steps = run.steps + 1
    return _with_run(state, event, f"step {steps}", _going_on(run, what, what.iterate, steps))


def _put(state: SessionState, event: Event, what: IteratePut) -> SessionState:
    run = _in_hand(state)
    undo = f"iterate {what.iterate.k}, put by hand"
    return _with_run(state, event, undo, _going_on(run, what, what.iterate, run.steps))


def _going_on(run: Run, what: StepTaken | IteratePut, iterate: Iterate, steps: int) -> Run:
    _check_iterate(iterate, run.current.k + 1, by_hand=isinstance(what, IteratePut))
    _check_goes_on(what.state, what.ending)
    return _changed(run, run.iterates.append(iterate), what.state, steps, run.spent + what.spent, what.ending)


def _ended(run: Run, what: StepTaken) -> Run:
    return _changed(run, run.iterates, run.state, run.steps, run.spent + what.spent, what.ending)


def _changed(
    run: Run, iterates: Chain[Iterate], state: State | None, steps: int, spent: Spent, ending: Ending | None
) -> Run:
    return Run(
        run.number, run.plan, run.stated, run.origin, iterates, state, steps, spent, ending, run.parent, run.readings
    )


def _taken_up(state: SessionState, event: Event, what: RunTakenUp) -> SessionState:
    if what.run == state.hand:
        raise RecordError(f"run {what.run} is in hand already")
    run = _run(state, what.run)
    return _doing(state, event, f"taking up run {what.run}", phase=_phase(run), hand=run.number)


def _abandoned(state: SessionState, event: Event, what: RunAbandoned) -> SessionState:
    run = _in_hand(state)
    if not what.reason.strip():
        raise RecordError("a run is abandoned without a reason")
    ended = replace(run, ending=Ending("abandoned", None, what.reason))
    return _with_run(state, event, f"abandoning run {run.number}", ended)


def _withdrawn(state: SessionState, event: Event, what: Withdrawn) -> SessionState:
    before = state.before
    if before is None or what.of != before.events:
        due = "nothing" if before is None else f"event {before.events}"
        raise RecordError(f"event {what.of} is withdrawn where {due} can be")
    return _on(
        before,
        event,
        notes=state.notes,
        run_numbers=state.run_numbers,
        problem_numbers=state.problem_numbers,
        environment=state.environment,
    )


def _noted(state: SessionState, event: Event, what: NoteMade) -> SessionState:
    run = state.run
    note = Note(event.at, event.by, what.text, run.number if run else None, run.current.k if run else None)
    return _on(state, event, notes=(*state.notes, note))


def _check_iterate(iterate: Iterate, k: int, *, by_hand: bool) -> None:
    if iterate.k != k:
        raise RecordError(f"iterate {iterate.k} stands where iterate {k} is due")
    if bool(iterate.put.strip()) != by_hand:
        raise RecordError("an iterate put by hand, and only that, has a reason")


def _check_goes_on(state: State | None, ending: Ending | None) -> None:
    if state is None and ending is None:
        raise RecordError("the run has no state to go on from, and has not ended")
    if ending is not None and ending.outcome == "abandoned":
        raise RecordError("only a person abandons a run, in an event of its own")


def _in_hand(state: SessionState) -> Run:
    run = state.run
    assert run is not None, "the table of transitions asks for it"
    return run


def _run(state: SessionState, number: int) -> Run:
    for run in state.runs:
        if run.number == number:
            return run
    raise RecordError(f"there is no run {number}")


def _phase(run: Run) -> Phase:
    return "stepping" if run.ending is None else "ended"


_COMMAND_OF: Mapping[type[Happening], type[Command]] = {
    ProblemStated: StateProblem,
    RunBegun: BeginRun,
    StepTaken: TakeSteps,
    IteratePut: PutIterate,
    RunTakenUp: TakeUp,
    RunAbandoned: Abandon,
    Withdrawn: Withdraw,
    NoteMade: AddNote,
}
_APPLY: Mapping[type[Happening], Callable[[SessionState, Event, Any], SessionState]] = {
    SessionOpened: _opened,
    SessionResumed: _resumed,
    ProblemStated: _stated,
    RunBegun: _begun,
    StepTaken: _stepped,
    IteratePut: _put,
    RunTakenUp: _taken_up,
    RunAbandoned: _abandoned,
    Withdrawn: _withdrawn,
    NoteMade: _noted,
}
