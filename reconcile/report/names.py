"""File names made of salts: safe on every system, and no two alike."""

from __future__ import annotations

import re
from collections.abc import Iterable


def file_names(salts: Iterable[str]) -> dict[str, str]:
    """A name for each salt that differs from the others' also where case does not count.

    Parameters
    ----------
    salts : iterable of str
        Formulae as printed.

    Returns
    -------
    names : dict
        salt ─► name without ending; letters, digits, ``_`` and ``-`` only.

    Examples
    --------
    >>> file_names(["KCl", "CaCl2·6H2O", "Ca(NO3)2"])
    {'KCl': 'KCl', 'CaCl2·6H2O': 'CaCl2_6H2O', 'Ca(NO3)2': 'Ca-NO3-2'}
    """
    names: dict[str, str] = {}
    taken: set[str] = set()
    for salt in salts:
        plain = re.sub(r"[^A-Za-z0-9_]+", "-", salt.replace("·", "_")).strip("-")[:80] or "salt"
        name, count = plain, 1
        while name.lower() in taken:
            count += 1
            name = f"{plain}_{count}"
        taken.add(name.lower())
        names[salt] = name
    return names
