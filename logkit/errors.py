"""The errors logkit raises. Every one says what is wrong, where, and what to do about it.

Nothing of geology belongs here: a `Finding` about a log lives in `logkit.model`.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from difflib import get_close_matches
from typing import Any


class LogkitError(Exception):
    """Base of all errors that logkit raises on purpose.

    Parameters
    ----------
    what : what is wrong, in one sentence
    remedy : what the person can do about it
    """

    def __init__(self, what: str, remedy: str = "") -> None:
        self.what = what
        self.remedy = remedy
        super().__init__(f"{what} {remedy}".strip())


class ArgumentError(LogkitError, ValueError):
    """An argument of a public function is out of what the function can take.

    The argument's name, the value and what is allowed are kept as attributes.
    """

    def __init__(self, argument: str, value: Any, allowed: str) -> None:
        self.argument = argument
        self.value = value
        self.allowed = allowed
        super().__init__(f"{argument} is {value!r}, but it must be {allowed}.")


class UnknownNameError(LogkitError, KeyError):
    """A name that is not in a registry, a vocabulary or a style; names the nearest known one."""

    def __init__(self, kind: str, name: str, known: Iterable[str], where: str = "") -> None:
        self.kind = kind
        self.name = name
        self.known = tuple(sorted(known))
        self.nearest = nearest(name, self.known)
        place = f" ({where})" if where else ""
        hint = f"Did you mean {self.nearest!r}?" if self.nearest else f"Known: {', '.join(self.known)}."
        super().__init__(f"There is no {kind} called {name!r}{place}.", hint)

    def __str__(self) -> str:
        return f"{self.what} {self.remedy}".strip()


class DataFileError(LogkitError):
    """A data file (vocabulary, references, style, settings) cannot be used; names file and line."""

    def __init__(self, file: str, line: int | None, what: str, remedy: str = "") -> None:
        self.file = file
        self.line = line
        place = f"{file}, line {line}" if line else file
        super().__init__(f"{place}: {what}", remedy)


class LogErrors(LogkitError):
    """A log that cannot be used as it stands: carries every finding of the file.

    Attributes
    ----------
    findings : all findings of the file, errors first
    log : what could be read, or None
    """

    def __init__(self, findings: Sequence[Any], log: Any = None) -> None:
        self.findings = tuple(findings)
        self.log = log
        errors = [f for f in self.findings if f.level == "error"]
        lines = "\n".join(f"  {f}" for f in errors[:20])
        more = f"\n  … and {len(errors) - 20} more" if len(errors) > 20 else ""
        noun = "error" if len(errors) == 1 else "errors"
        super().__init__(f"The log has {len(errors)} {noun}:\n{lines}{more}")


def nearest(name: str, known: Iterable[str]) -> str | None:
    """The known name most like the given one, or None when nothing is near."""
    folded = {k.casefold(): k for k in known}
    match = get_close_matches(name.casefold(), folded, n=1, cutoff=0.6)
    return folded[match[0]] if match else None
