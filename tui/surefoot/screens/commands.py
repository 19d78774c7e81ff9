"""The one table of keys. Bindings, key lines, the page of keys and the guide are made from it.

`ROOMS` are the screens one moves between; a key belongs to one of them, to `EVERYWHERE`, or to a text `FIELD`. A key
with a `needs` is offered only when the session's state allows that command; else it is shown in parentheses and says
why not when it is pressed.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from textual.binding import Binding, BindingType

from surefoot.session import commands as asked


@dataclass(frozen=True, slots=True)
class Key:
    """One key of one place.

    Attributes:
        action: name of the handler, `action_<action>`.
        keys: what may be pressed, in the toolkit's names; the first is the one shown.
        shown: how the key is written in the key line.
        label: what it does, in one to three words.
        meaning: what it does, in a sentence, for the page of keys.
        needs: the command that the session must allow, None when it is always allowed.
        line: whether it is in the key line; what is not is on the page of keys.
    """

    action: str
    keys: tuple[str, ...]
    shown: str
    label: str
    meaning: str
    needs: type | None = None
    line: bool = True


ROOMS: tuple[str, ...] = ("function", "method", "steps", "record")

EVERYWHERE: tuple[Key, ...] = (
    Key("go_function", ("1", "alt+1"), "1", "function", "Go to the function: equation and inputs.", line=False),
    Key("go_method", ("2", "alt+2"), "2", "method", "Go to the method: starts, limits, stopping test.", line=False),
    Key("go_steps", ("3", "alt+3"), "3", "steps", "Go to the steps of the run in hand.", line=False),
    Key("go_record", ("4", "alt+4"), "4", "record", "Go to the record: events, recomputing.", line=False),
    Key("leave", ("ctrl+q",), "ctrl+q", "leave", "Leave the program; all that was done is on disk.", line=False),
    Key("opening", ("w",), "w", "sessions", "Put this session away and show the sessions found.", line=False),
    Key("note", ("n",), "n", "note", "Write a note into the record.", asked.AddNote, line=False),
    Key("keys", ("question_mark", "f1"), "?", "keys", "Show this page."),
)

FIELD: tuple[Key, ...] = (
    Key("out_of_field", ("escape",), "esc", "keys of the page", "Leave the field, so that single keys act again."),
    Key("accept", ("ctrl+s",), "ctrl+s", "accept", "Accept what is typed."),
    Key("editor", ("ctrl+o",), "ctrl+o", "own editor", "Edit in $VISUAL or $EDITOR and come back."),
)

PLACES: Mapping[str, tuple[Key, ...]] = {
    "opening": (
        Key("resume", ("enter",), "enter", "resume", "Resume the session under the cursor."),
        Key("new", ("n",), "n", "new", "Begin a new session."),
        Key("open", ("o",), "o", "open a file", "Open a session (.json) or a problem file (.toml)."),
        Key("filter", ("slash",), "/", "filter", "Show only the sessions whose title or state has these letters."),
        Key("leave", ("q", "ctrl+q"), "q", "leave", "Leave the program."),
        Key("keys", ("question_mark", "f1"), "?", "keys", "Show this page."),
    ),
    "function": (
        Key("accept", ("a", "ctrl+s"), "a", "accept", "Accept the problem as it stands.", asked.StateProblem),
        Key("edit", ("enter", "i"), "enter", "type", "Go into the field that was last in hand.", asked.StateProblem),
        Key("open", ("o",), "o", "open a file", "Open a problem file (.toml) or a session (.json)."),
        Key("paste", ("p",), "p", "paste source", "Paste Fortran, C or Python lines.", asked.StateProblem),
        Key(
            "editor",
            ("e", "ctrl+o"),
            "e",
            "own editor",
            "Edit the problem file text in $VISUAL or $EDITOR.",
            asked.StateProblem,
        ),
        Key("read", ("r",), "r", "as read", "Show all texts as they were read, and the derivatives.", line=False),
        Key("discard", ("x",), "x", "throw away", "Throw away what is typed and not accepted.", line=False),
        Key("withdraw", ("backspace",), "backspace", "withdraw", "Take back what was done last.", asked.Withdraw),
    ),
    "method": (
        Key("begin", ("b", "ctrl+s"), "b", "begin the run", "Evaluate the starts and begin a run.", asked.BeginRun),
        Key("change", ("enter",), "enter", "change", "Choose the method, or change the value under the cursor."),
        Key("clear", ("delete", "x"), "x", "clear", "Put the value under the cursor back to its default."),
        Key("pick_start", ("s",), "s", "pick a start", "Choose a start on the picture of the residual."),
        Key("zoom", ("z",), "z", "zoom", "Show the working range or what is around the starts."),
        Key("withdraw", ("backspace",), "backspace", "withdraw", "Take back what was done last.", asked.Withdraw),
    ),
    "steps": (
        Key("step", ("space",), "space", "step", "Take one step.", asked.TakeSteps),
        Key("withdraw", ("backspace",), "backspace", "withdraw", "Take back what was done last.", asked.Withdraw),
        Key("to_the_stop", ("end", "g"), "end", "to the stop", "Go on until the run ends.", asked.TakeSteps),
        Key("several", ("m",), "m", "more steps", "Take a number of steps.", asked.TakeSteps, line=False),
        Key("trial", ("t",), "t", "trial steps", "See where each method would land from here.", asked.TakeSteps),
        Key("picture", ("c",), "c", "convergence", "Change the picture: the step, or convergence.", line=False),
        Key("zoom", ("z",), "z", "zoom", "Show the working range or what is around the iterates.", line=False),
        Key("put", ("p",), "p", "put x", "Go on from an x of your own, with a reason.", asked.PutIterate, line=False),
        Key(
            "variant",
            ("v",),
            "v",
            "variant",
            "Begin a run from this iterate under a changed plan.",
            asked.BeginVariant,
            line=False,
        ),
        Key("other_run", ("r",), "r", "other run", "Take up the next run.", asked.TakeUp, line=False),
        Key("abandon", ("d",), "d", "abandon", "End the run without a verdict.", asked.Abandon, line=False),
        Key("earlier", ("up",), "up", "earlier", "Look at the step before.", line=False),
        Key("later", ("down",), "down", "later", "Look at the step after.", line=False),
    ),
    "record": (
        Key("recompute", ("r",), "r", "recompute", "Do every step again and compare the bits."),
        Key("earlier", ("up",), "up", "earlier", "Go up.", line=False),
        Key("later", ("down",), "down", "later", "Go down.", line=False),
        Key("withdraw", ("backspace",), "backspace", "withdraw", "Take back what was done last.", asked.Withdraw),
    ),
}


def bindings_of(place: str) -> list[BindingType]:
    """The toolkit's bindings of a place: every key goes through `action_press`, the one gate."""
    return [
        Binding(",".join(key.keys), f"press('{key.action}')", key.label, show=False, id=f"{place}.{key.action}")
        for key in keys_of(place)
    ]


def key_of(place: str, action: str) -> Key:
    """The key of a place that has this action. Raises KeyError when there is none."""
    for key in keys_of(place):
        if key.action == action:
            return key
    raise KeyError(action)


def keys_of(place: str) -> tuple[Key, ...]:
    """All keys that act in a place, its own first."""
    return PLACES[place] + (EVERYWHERE if place in ROOMS else ())
