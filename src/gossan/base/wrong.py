"""A wrong value that does not know its place yet: whoever knows file and line makes a Fault of it."""

from __future__ import annotations

from collections.abc import Iterable
from difflib import get_close_matches


class Wrong(ValueError):
    """What is wrong with a value: `wrong` follows the name of its key, `right` is the cure."""

    def __init__(self, wrong: str, right: str = ""):
        super().__init__(wrong, right)
        self.wrong, self.right = wrong, right

    def __str__(self) -> str:
        return f"the value {self.wrong}" + (f": {self.right}" if self.right else "")


def closest(text: str, choices: Iterable[str], cutoff: float = 0.6) -> str:
    """The choice most like a text, capitals aside; "" where none comes near.

    >>> closest("Porosty", ["length", "porosity"])
    'porosity'
    """
    lowered = {choice.lower(): choice for choice in choices}
    close = get_close_matches(text.lower(), lowered, n=1, cutoff=cutoff)
    return lowered[close[0]] if close else ""


def did_you_mean(text: str, choices: Iterable[str], quote: str = '"') -> str:
    """The cure of a mistyped name: the closest choice, or all of them where there are few; else "".

    >>> did_you_mean("fluxx", ["flux", "concentration"])
    'did you mean "flux"?'
    """
    choices = list(choices)
    close = closest(text, choices)
    if close:
        return f"did you mean {quote}{close}{quote}?"
    if choices and len(choices) <= 12:
        return "one of " + ", ".join(f"{quote}{choice}{quote}" for choice in choices) + " is needed"
    return ""
