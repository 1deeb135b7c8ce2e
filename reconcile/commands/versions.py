"""The versions that can change a number."""

from __future__ import annotations

import platform
from importlib.metadata import PackageNotFoundError, version

from reconcile import __version__

_MATTER = ("numpy", "scipy", "pandas", "statsmodels", "matplotlib", "pint", "chemicals")


def versions() -> str:
    """One line a package, ours first."""
    lines = [f"reconcile {__version__}", f"python {platform.python_version()}"]
    for name in _MATTER:
        try:
            lines.append(f"{name} {version(name)}")
        except PackageNotFoundError:
            lines.append(f"{name} is missing")
    return "\n".join(lines)
