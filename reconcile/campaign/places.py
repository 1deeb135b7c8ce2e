"""Places in campaign.toml: how messages name them, their order in the file, and who signed."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any


def order(document: Mapping[str, Any], path: Sequence[str | int]) -> tuple[int, ...]:
    """The place of a key in the file, for putting problems in its order."""
    places: list[int] = []
    here: Any = document
    for step in path:
        if isinstance(here, Mapping):
            names = list(here)
            places.append(names.index(str(step)) if step in names else len(names))
            here = here.get(str(step))
        elif isinstance(here, list) and isinstance(step, int) and step < len(here):
            places.append(step)
            here = here[step]
        else:
            break
    return (0, *places)


def spelt(path: Sequence[str | int]) -> str:
    """A path as messages print it.

    Examples
    --------
    >>> spelt(("exclude", 1, "reason")), spelt(("analysis", "max_molality"))
    ('exclude 2, reason', '[analysis] max_molality')
    """
    if len(path) > 1 and isinstance(path[1], int):
        return f"{path[0]} {path[1] + 1}" + "".join(f", {step}" for step in path[2:])
    if len(path) == 1:
        return str(path[0])
    return f"[{'.'.join(str(step) for step in path[:-1])}] {path[-1]}"


def signed(text: str, by: str | None, date: str | None) -> str:
    """A sentence with who wrote it and when, where that is given.

    Examples
    --------
    >>> signed("bulb broke late", "A. B.", "2026-05-31")
    'bulb broke late (A. B., 2026-05-31)'
    """
    signature = ", ".join(part for part in (by, date) if part)
    return f"{text} ({signature})" if signature else text
