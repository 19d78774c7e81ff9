"""A step in words: what it took for true, where it landed, and what deviates from the plain rule."""

from __future__ import annotations

from surefoot.equation.choice import arithmetic_of
from surefoot.equation.results import Failure
from surefoot.figures.numbers import short, significant, with_unit
from surefoot.methods.contract import Account, Iterate, Limited
from surefoot.methods.stopping import LEFT_SIDES
from surefoot.screens.words import OUTCOME_WORDS
from surefoot.session.state import Run

_MIDDLE = 1e-9  # part of its bracket by which a middle may be off for rounding
_STAGES = {
    "damping": "damped",
    "step_limit": "held by step_limit",
    "relative_step_limit": "held by relative_step_limit",
    "factor_limit": "held by factor_limit",
    "first_step_limit": "held by first_step_limit",
    "edge_fraction": "held short of the bound",
    "bounds": "stopped at the bound",
}


def account_words(run: Run, iterate: Iterate, previous: Iterate | None, order: float | None) -> str:
    """One or two sentences on how this iterate came about."""
    words = _Words(run)
    if iterate.put:
        return f"Put by hand: {words.x(iterate.x)}. Reason: {iterate.put}"
    if iterate.account is None:
        return f"Start {iterate.k}: {words.x(iterate.x)}, {words.residual(iterate)}."
    parts = [f"Step to {iterate.k}: {words.basis(iterate.account, iterate.raw)}"]
    if previous is not None:
        parts.append(f"d{words.name} = {words.amount(iterate.x - previous.x)}")
    text = ", ".join(parts) + "."
    for limited in iterate.limited:
        text += " " + words.limit(limited)
    if isinstance(iterate.f, Failure):
        return f"{text} No residual there: {iterate.f}."
    return text if order is None else f"{text} Order {order:.1f}."


def ending_sentence(run: Run) -> str:
    """How the run ended, with both sides of the tests that took part in short figures."""
    if run.ending is None:
        return ""
    if run.ending.verdict is None or run.ending.outcome != "converged":
        return run.ending.says
    words, verdict = _Words(run), run.ending.verdict
    steps = f"{run.steps} step{'' if run.steps == 1 else 's'}"
    sides = ", ".join(
        f"{name} {words.number(left, 3)} {'<=' if left <= right else '>'} {words.number(right, 3)}"
        for name, left, right in verdict.sides
        if name in LEFT_SIDES
    )
    if verdict.test == "exact_zero":
        sides = "the residual is exactly zero"
    test = "" if sides.startswith(verdict.test) else verdict.test
    parts = [part for part in (test, sides) if part]
    return f"{OUTCOME_WORDS[run.ending.outcome]} after {steps}: {', '.join(parts)}"


class _Words:
    """Numbers of one run as short text with its unit."""

    def __init__(self, run: Run) -> None:
        problem = run.stated.problem
        self.name, self.unit = problem.unknown, problem.unit
        self._arithmetic = arithmetic_of(run.plan.arithmetic)

    def number(self, x: float, digits: int) -> str:
        return significant(self._arithmetic.encode(x), digits)

    def amount(self, x: float) -> str:
        return with_unit(self.number(x, 3), self.unit)

    def x(self, x: float) -> str:
        return f"{self.name} = {with_unit(self.number(x, 9), self.unit)}"

    def residual(self, iterate: Iterate) -> str:
        if isinstance(iterate.f, Failure):
            return f"no residual: {iterate.f}"
        return f"residual {short(self._arithmetic.encode(iterate.f))}"

    def basis(self, account: Account, raw: float | None) -> str:
        at = [self.number(point.x, 8) for point in account.points]
        figures = {name: self.number(value, 3) for name, value in account.figures}
        if account.shape == "tangent":
            slope = self.number(account.slope, 4) if account.slope is not None else "?"
            age = f", held for {figures['age']} steps" if figures.get("age", "0") not in ("0", "") else ""
            step = f", difference step {figures['h']}" if "h" in figures else ""
            return f"tangent at {self.name} = {at[0]}, slope {slope}{age}{step}"
        if account.shape == "chord":
            slope = self.number(account.slope, 4) if account.slope is not None else "?"
            step = f", difference step {figures['h']}" if "h" in figures else ""
            kept = f", f at the kept end taken as {figures['kept_f']}" if "kept_f" in figures else ""
            double = " of double length" if "secant_length" in figures else ""
            return f"chord{double} through {self.name} = {' and '.join(at)}, slope {slope}{step}{kept}"
        if account.shape == "bracket":
            width = f", width {figures.pop('width')}" if "width" in figures else ""
            ends = " .. ".join(at[:2])
            if raw is not None and self._is_middle(account, raw):
                return f"middle of {ends}{width}"
            others = "".join(f", {name.replace('_', ' ')} {value}" for name, value in figures.items())
            return f"bracket {ends}{width}{others}"
        if account.shape == "cobweb":
            return f"{self.name} = g({at[0]})"
        return f"{'parabola' if len(at) < 4 else 'inverse cubic'} through {', '.join(at)}"

    def _is_middle(self, account: Account, raw: float) -> bool:
        """Whether a step lands in the middle of its bracket, but for rounding."""
        a, b, x = (self._arithmetic.approximate(each) for each in (account.points[0].x, account.points[1].x, raw))
        return abs(x - (a / 2 + b / 2)) <= _MIDDLE * abs(b - a)

    def limit(self, limited: Limited) -> str:
        how = _STAGES.get(limited.stage, limited.stage)
        return f"The rule wanted {self.number(limited.before, 6)}; {how} to {self.number(limited.after, 6)}."
