"""Solution calorimetry, from run to reconciled table: the public names, loaded when first asked for."""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from reconcile.campaign import read_campaign
    from reconcile.pipeline import analyse
    from reconcile.reference import lookup
    from reconcile.report import write_report

__all__ = ["__version__", "analyse", "lookup", "read_campaign", "write_report"]

_HOME = {
    "read_campaign": "reconcile.campaign",
    "analyse": "reconcile.pipeline",
    "write_report": "reconcile.report",
    "lookup": "reconcile.reference",
}


def _version() -> str:
    from importlib.metadata import PackageNotFoundError, version

    try:
        return version("reconcile-enthalpy")
    except PackageNotFoundError:  # the folder is on the path, but was never installed
        return "not installed"


def __getattr__(name: str) -> Any:
    if name == "__version__":
        value: Any = _version()
    elif name in _HOME:
        value = getattr(import_module(_HOME[name]), name)
    else:
        raise AttributeError(f"module 'reconcile' has no attribute {name!r}")
    globals()[name] = value
    return value


def __dir__() -> list[str]:
    return sorted({*globals(), *__all__})
