"""The words that `--files` knows, and which of them are served."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from difflib import get_close_matches
from importlib import import_module
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from reconcile.report.material import Material

Render = Callable[["Material"], Iterator[tuple[str, bytes]]]

SERVED: dict[str, str] = {  # word ─► module with render(material); written in this order
    "results": "reconcile.report.results_json",
    "tables": "reconcile.report.tables",
    "figures": "reconcile.report.figure_files",
    "page": "reconcile.report.page",
}
NOT_YET = ("appendix", "workbook", "thermoml", "citations", "runs")


class ReportError(Exception):
    """What was asked of the report cannot be done; says what, and how to mend it.

    Attributes
    ----------
    found, expected, remedy : str
    """

    def __init__(self, found: str, expected: str, remedy: str) -> None:
        super().__init__(f"{found}. Expected {expected}. {remedy}")
        self.found, self.expected, self.remedy = found, expected, remedy


def chosen(files: Iterable[str] | None) -> tuple[str, ...]:
    """The formats asked for, in the order of writing; all that are served where ``files`` is None.

    Raises
    ------
    ReportError
        If a word is unknown, not yet served, or there is none.

    Examples
    --------
    >>> chosen(["page", "results"])
    ('results', 'page')
    """
    if files is None:
        return tuple(SERVED)
    words = [word.strip() for word in files]
    for word in words:
        if word in SERVED:
            continue
        known = ", ".join(SERVED)
        if word in NOT_YET:
            raise ReportError(f"files: {word} is not yet served", f"words out of {known}", f"Leave {word} out.")
        near = get_close_matches(word, [*SERVED, *NOT_YET], n=1)
        remedy = f"Did you mean {near[0]}?" if near else "Separate several words with commas."
        raise ReportError(f'files: "{word}" is unknown', f"words out of {known}", remedy)
    if not words:
        raise ReportError("files: nothing is named", f"words out of {', '.join(SERVED)}", "Name at least one.")
    return tuple(word for word in SERVED if word in words)


def renderer(word: str) -> Render:
    """The function that renders a format; its module is loaded only now."""
    render: Render = import_module(SERVED[word]).render
    return render
