"""What the command line names, read before any work is done: designs, policies, states; and what is wrong with it."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from stresscheck.design.model import Design
    from stresscheck.errors import Problem


def load_all(
    files: Sequence[Path], derating: str | None, states: Sequence[str] | None, *, policies: bool = True
) -> tuple[list[Design], list[Problem]]:
    """Designs that can be used, and every problem of all files, of their policies and of the states asked for.

    A problem names its file as it was typed: two folders may each have a `tank.toml`. policies: also read the policy
    that each design, or `derating`, names.
    """
    from stresscheck.design.load import load_design
    from stresscheck.errors import InputError
    from stresscheck.limits.policy import load_policy

    designs: list[Design] = []
    problems: list[Problem] = []
    for file in files:
        try:
            design = load_design(file)
            missing = [name for name in states or () if name not in design.states]
            problems.extend(not_known(str(file), "--state", name, design.states) for name in missing)
            if policies:
                load_policy(design.derating if derating is None else derating, design.folder)
            designs.append(design)
        except InputError as error:
            problems.extend(_as_typed(problem, file, derating) for problem in error.problems)
    return designs, list(dict.fromkeys(problems))


def _as_typed(problem: Problem, file: Path, derating: str | None) -> Problem:
    """The problem with its file as the command line has it; a policy that isn't there is one of whoever named it."""
    from stresscheck.design.problems import key_text

    if problem.file == key_text((file.name,)):
        return replace(problem, file=str(file))
    if not problem.file:
        if derating is None:
            return replace(problem, file=str(file))
        return replace(problem, file="command line", key="--derating")
    if derating is not None and problem.file == Path(derating).name:
        return replace(problem, file=derating)
    return problem


def wrong(key: str, found: str, expected: str, repair: str) -> Problem:
    """A problem of the command line itself."""
    from stresscheck.errors import Problem

    return Problem("bad-command", "command line", None, key, found, expected, repair)


def not_known(file: str, key: str, found: str, known: Iterable[str], code: str = "unknown-name") -> Problem:
    """A name that isn't among the known ones; the repair is the one that looks most like it."""
    from stresscheck.design.problems import nearest
    from stresscheck.errors import Problem

    names = list(known)
    near = nearest(found, names)
    repair = f"did you mean {near}?" if near else "name one of these"
    return Problem(code, file, None, key, found or "nothing", "one of " + ", ".join(names), repair)
