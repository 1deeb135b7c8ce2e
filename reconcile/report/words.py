"""Numbers with their nouns, and lists as one reads them."""

from __future__ import annotations

from collections.abc import Iterable


def counted(number: int, one: str, many: str = "") -> str:
    """Number with its noun.

    Examples
    --------
    >>> counted(1, "salt"), counted(3, "salt"), counted(0, "hypothesis", "hypotheses")
    ('1 salt', '3 salts', 'no hypotheses')
    """
    return f"{number or 'no'} {one if number == 1 else many or one + 's'}"


def listed(names: Iterable[object], most: int = 4) -> str:
    """Names with commas and a last "and"; beyond ``most`` the number of the others.

    Examples
    --------
    >>> listed(["KCl"]), listed(["KCl", "NaCl"]), listed("ABCDEF")
    ('KCl', 'KCl and NaCl', 'A, B, C and 3 others')
    """
    shown = [str(name) for name in names]
    if len(shown) > most:
        shown = [*shown[: most - 1], f"{len(shown) - most + 1} others"]
    return shown[0] if len(shown) == 1 else f"{', '.join(shown[:-1])} and {shown[-1]}"


def sentence(text: object) -> str:
    """A reason as a sentence: a full stop behind, and the first word, if it is one, with a capital.

    Examples
    --------
    >>> sentence("only heats of dilution are included"), sentence("CO3-2 reacts with water."), sentence("")
    ('Only heats of dilution are included.', 'CO3-2 reacts with water.', '')
    """
    whole = str(text).strip().rstrip(".")
    return f"{whole[0].upper()}{whole[1:]}." if whole else ""
