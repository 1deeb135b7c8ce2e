"""What several formats print and only one should make: the results with their drawings."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

from reconcile.report.names import file_names
from reconcile.report.results import Results


@dataclass(frozen=True)
class Material:
    """Results together with what several formats print and only one should make."""

    results: Results

    @cached_property
    def drawings(self) -> dict[str, str]:
        """Name of a figure ─► SVG text."""
        from reconcile.report.figures import draw  # loads matplotlib

        return draw(self.results)

    @cached_property
    def names(self) -> dict[str, str]:
        """Salt ─► name of its figure's file, without ending."""
        return file_names([str(salt) for salt in self.results.salts["salt"]])
