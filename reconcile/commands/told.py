"""What a command prints of a finished report."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from reconcile.report.results import Results


def summary(analysis: Results, written: Sequence[Path]) -> str:
    """The verdict, then the file to open."""
    from reconcile.report.verdict import verdict
    from reconcile.report.words import counted

    return "\n".join([*verdict(analysis), f"{counted(len(written), 'file')} written; open", str(written[-1])])
