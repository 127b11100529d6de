"""Every exception the project raises on purpose.

SettlepointError            base of them all; its text is a sentence for the user
├── InputError              what the user gave is wrong; carries every Problem found at once
├── NotComputable           the input is valid but the asked figure does not exist for this axis
├── CannotWrite             a file could not be written; the old one is whole
└── Stopped                 the user stopped a long computation
"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Problem:
    """One thing wrong with the input: where, what stands there, which rule it breaks, what would be right."""

    path: str
    rule: str
    value: str = ""
    example: str = ""

    def __str__(self) -> str:
        text = f"{self.path}: " if self.path else ""
        if self.value:
            text += f"{self.value} "
        text += self.rule
        if self.example:
            text += f" For example {self.example}" if self.rule.endswith("?") else f", for example {self.example}"
        return text


class SettlepointError(Exception):
    """Base of every exception the project raises on purpose."""


class InputError(SettlepointError):
    """The input is wrong; `problems` holds all that was found, in file order."""

    def __init__(self, problems: list[Problem] | tuple[Problem, ...]) -> None:
        self.problems = tuple(problems)
        super().__init__("\n".join(str(problem) for problem in self.problems))


class NotComputable(SettlepointError):
    """The input is valid but the asked figure does not exist for this axis."""


class CannotWrite(SettlepointError):
    """A file could not be written; whatever stood there before is whole."""


class Stopped(SettlepointError):
    """The user stopped a long computation."""
