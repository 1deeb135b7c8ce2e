"""What is wrong with a campaign: told all at once, each with its place and its remedy."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

SHOWN_OF_A_KIND = 50  # up to so many of one kind are printed in full …
SHOWN_OF_MANY = 10  # … of more only the first ten and a count


@dataclass(frozen=True, slots=True)
class Problem:
    """One thing that has to be mended before anything is computed.

    ``row`` is counted as a spreadsheet shows it, the heading being 1; None where the problem is the file's or a key's
    of campaign.toml, whose place then stands in ``column``. ``code`` names the kind of the problem, for programs.
    """

    file: str
    row: int | None
    column: str | None
    found: str  # what stands there, in words
    expected: str
    remedy: str  # a sentence
    code: str

    def __str__(self) -> str:
        """One line: file, row, column: what stands there. Expected what. Remedy."""
        place = [self.file] if self.file else []
        table = not self.file.endswith(".toml")
        if self.row == 1 and table:
            place.append("heading")  # the heading itself stands in `found`
        elif self.row is not None:
            place.append(f"{'row' if table else 'line'} {self.row}")
        if self.column and self.row != 1:
            place.append(f"`{self.column}`" if self.row is not None else self.column)
        text = f"{', '.join(place)}: " if place else ""
        text += f"{self.found.rstrip('.')}."
        if self.expected:
            text += f" Expected {self.expected.rstrip('.')}."
        if self.remedy:
            text += f" {self.remedy}"
        return text


class CampaignError(Exception):
    """The campaign cannot be used as it stands; ``problems`` holds every reason, in the order of the files.

    The text prints the first ten of any kind of which a file has more than fifty, and how many more there are.
    """

    def __init__(self, problems: Iterable[Problem]) -> None:
        self.problems = tuple(problems)
        super().__init__(self.problems)

    def __str__(self) -> str:
        """Every problem on a line of its own, long runs of one kind shortened."""
        kinds: dict[tuple[str, str], list[Problem]] = {}
        for problem in self.problems:
            kinds.setdefault((problem.file, problem.code), []).append(problem)
        shown: dict[tuple[str, str], int] = {}
        lines = []
        for problem in self.problems:
            kind = (problem.file, problem.code)
            alike = kinds[kind]
            shown[kind] = shown.get(kind, 0) + 1
            if len(alike) <= SHOWN_OF_A_KIND or shown[kind] <= SHOWN_OF_MANY:
                lines.append(str(problem))
            elif shown[kind] == SHOWN_OF_MANY + 1:
                lines.append(_and_more(problem, alike[SHOWN_OF_MANY:]))
        return "\n".join(lines)


def _and_more(first: Problem, left: list[Problem]) -> str:
    """The line that stands for the problems of one kind that are not printed."""
    columns = list(dict.fromkeys(problem.column for problem in left if problem.column))
    where = f", in {', '.join(f'`{column}`' for column in columns)}" if 0 < len(columns) <= 5 else ""
    rows = [problem.row for problem in left if problem.row is not None]
    until = f", up to row {max(rows)}" if rows else ""
    return f"{first.file}: and {len(left)} more of this kind ({first.code}){where}{until}."


class Problems:
    """A collector: problems come in any order and leave in the order of the files, rows and columns."""

    def __init__(self) -> None:
        self._found: list[tuple[tuple[int, ...], Problem]] = []
        self._files: dict[str, int] = {}
        self._columns: dict[str, dict[str, int]] = {}

    def __len__(self) -> int:
        """How many so far."""
        return len(self._found)

    def open(self, file: str, headings: Iterable[str] = ()) -> None:
        """Note the place of a file, and of its columns, in the order of printing."""
        self._files.setdefault(file, len(self._files))
        ranks = self._columns.setdefault(file, {})
        for position, heading in enumerate(headings):
            ranks.setdefault(heading, position)

    def add(
        self,
        file: str,
        row: int | None,
        column: str | None,
        found: str,
        expected: str,
        remedy: str,
        code: str,
        order: tuple[int, ...] | None = None,
    ) -> None:
        """Take in one problem; ``order`` replaces the row and column in the order within its file."""
        self.open(file)
        place = order or (row or 0, self._columns[file].get(column or "", len(self._columns[file])))
        problem = Problem(file, row, column, found, expected, remedy, code)
        self._found.append(((self._files[file], *place), problem))

    def add_rows(
        self,
        file: str,
        rows: NDArray[np.int64],
        column: str | None,
        found: str,
        expected: str,
        remedy: str,
        code: str,
    ) -> None:
        """Take in the same problem for many rows; loops over the bad rows only."""
        for row in rows.tolist():
            self.add(file, row, column, found, expected, remedy, code)

    def all(self) -> tuple[Problem, ...]:
        """Every problem, in the order of the files, without repetitions."""
        ordered = [problem for _, problem in sorted(self._found, key=lambda found: found[0])]
        return tuple(dict.fromkeys(ordered))

    def raise_if_any(self) -> None:
        """End here if anything is wrong.

        Raises
        ------
        CampaignError
            With all problems.
        """
        if self._found:
            raise CampaignError(self.all())


def quoted(text: object, length: int = 60) -> str:
    """A cell's text between quotation marks, on one line and cropped, as messages print it.

    Examples
    --------
    >>> quoted("1,0342")
    '"1,0342"'
    """
    shown = "".join(letter if letter.isprintable() else " " for letter in str(text))
    return f'"{shown if len(shown) <= length else shown[: length - 1] + "…"}"'


def number(value: float) -> str:
    """A number as a person would have typed it.

    Examples
    --------
    >>> number(-3.0), number(0.25)
    ('-3', '0.25')
    """
    shown = repr(float(value))
    return shown[:-2] if shown.endswith(".0") else shown
