"""figures/*.svg: the drawings as files."""

from __future__ import annotations

from collections.abc import Iterator

from reconcile.report.material import Material


def render(material: Material) -> Iterator[tuple[str, bytes]]:
    """One file a drawing."""
    for name, svg in material.drawings.items():
        yield f"figures/{name}.svg", svg.encode("utf-8", "replace")
