"""Arguments and options that several commands share."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import Any, TypeVar

import click

Command = TypeVar("Command", bound=Callable[..., Any])

campaign = click.argument("campaign", nargs=-1, required=True, type=click.Path(path_type=Path))


def out(default: str) -> Callable[[Command], Command]:
    """--out, its default told in words."""
    return click.option(
        "--out", type=click.Path(path_type=Path), metavar="FOLDER", help=f"Where the report goes. [default: {default}]"
    )


files = click.option(
    "--files", metavar="NAMES", help="Only these, with commas between: results, tables, figures, page. [default: all]"
)


def words(text: str | None) -> tuple[str, ...] | None:
    """The names in --files, checked.

    Raises
    ------
    ReportError
        If one is unknown or not yet served.
    """
    from reconcile.report import chosen

    return None if text is None else chosen(word for word in text.split(",") if word.strip())
