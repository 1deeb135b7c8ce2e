"""A typed formula to its atoms: counts, hydrate water, one spelling."""

from __future__ import annotations

import re
from dataclasses import dataclass
from difflib import get_close_matches

from reconcile.chemistry.atomic_weights import ELEMENTS

WATER = "H2O"  # stands beside the elements: water of hydration is counted as itself

_PLAIN = str.maketrans("₀₁₂₃₄₅₆₇₈₉•∙⋅・‧*×−–", "0123456789·······--")
ROUND = str.maketrans("[]{}", "()()")
_FRACTIONS = {"½": ".5", "¼": ".25", "¾": ".75", "⅛": ".125", "⅓": "1/3", "⅔": "2/3", "⅜": ".375", "⅝": ".625"}
_SUPERSCRIPT = re.compile("[⁺⁻⁰¹²³⁴⁵⁶⁷⁸⁹]")
_NUMBER = re.compile(r"\d+/\d+|\d+\.\d+|\d+|\.\d+")
_TOKEN = re.compile(r"([A-Z][a-z]?)(\d*)|(\()|(\))(\d*)")
_OPEN_WATER = re.compile(r"[·.](?:[xnyz]H2O|aq|[xn]$)", re.IGNORECASE)
_STATE = re.compile(r"\((?:s|l|g|aq|cr|c)\)$")


class FormulaError(ValueError):
    """A formula that cannot be read; the facts are attributes.

    Attributes
    ----------
    found : str
        What was typed.
    expected : str
        What would have been right.
    remedy : str
        How to mend it.
    """

    def __init__(self, found: str, expected: str, remedy: str) -> None:
        self.found = found if len(found) <= 60 else f"{found[:60]}…"
        self.expected, self.remedy = expected, remedy
        super().__init__(f"“{self.found}”. Expected {expected}. {remedy}")


@dataclass(frozen=True, slots=True)
class Formula:
    """The atoms of a typed formula."""

    text: str  # one spelling: plain digits, round or square brackets as typed, middle dots, no blanks
    anhydrous_text: str  # the same without its water of hydration
    atoms: dict[str, int]  # of all but the water of hydration, per formula unit
    water: float  # moles of water of hydration per formula unit
    multiple: bool  # a count stands in front, or several salts are joined by dots


def read_formula(typed: str) -> Formula:
    """Atoms of a formula such as CaCl2·6H2O, CaSO4.½H2O, 2CaSO4·H2O, KCl·MgCl2·6H2O or Mg(H2O)6Cl2.

    Parameters
    ----------
    typed : str
        Dots may be · . * •, digits may be subscripts, brackets of any kind; blanks do not count.

    Returns
    -------
    formula : Formula

    Raises
    ------
    FormulaError
        For all else; says what stands there and how to mend it.

    Examples
    --------
    >>> read_formula("CaCl2 . 6 H2O").text, read_formula("CdSO4*8/3H2O").water
    ('CaCl2·6H2O', 2.6666666666666665)
    """
    text = _one_spelling(typed)
    parts = _split(text, typed)
    atoms: dict[str, int] = {}
    water = 0.0
    anhydrous: list[str] = []
    multiple = False
    for count, body in parts:
        content = _counts(body, typed)
        if set(content) == {WATER}:
            water += _value(count, typed) * content[WATER]
            continue
        factor = _value(count, typed)
        if factor != int(factor):
            raise FormulaError(typed, f"a whole number of {body} in a formula unit", "Multiply the formula through.")
        anhydrous.append(count + body)
        multiple = multiple or factor > 1
        for name, number in content.items():
            if name == WATER:
                water += factor * number
            else:
                atoms[name] = atoms.get(name, 0) + int(factor) * number
    if not anhydrous:
        raise FormulaError(typed, "a salt", "Water alone does not dissolve in water; write the salt's formula.")
    shown = "·".join(count + body for count, body in parts)
    return Formula(shown, "·".join(anhydrous), atoms, water, multiple or len(anhydrous) > 1)


def count_atoms(body: str) -> dict[str, int]:
    """Atoms of a formula without dots, charge or blanks: count_atoms("Fe(CN)6") is Fe 1, C 6, N 6."""
    return _counts(body, body, bare_water=False)


def _one_spelling(typed: str) -> str:
    """Plain digits, middle dots, no blanks; refuses what could be read in two ways."""
    text = str(typed).strip()
    if not text:
        raise FormulaError(typed, "a formula", "Write the salt, e.g. NaCl.")
    text = text.translate(_PLAIN)
    for sign, plain in _FRACTIONS.items():
        text = re.sub(rf"(?<!\d){sign}", ("0" + plain) if plain[0] == "." else plain, text).replace(sign, plain)
    if re.search(r"\d\s+\d", text):
        raise FormulaError(typed, "a dot before water of hydration", "Write it as in CaCl2·6H2O.")
    text = "".join(text.split())
    if "," in text:
        raise FormulaError(typed, "a formula without commas", "Write a decimal number with a point: CaSO4·0.5H2O.")
    if _STATE.search(text):
        state = text[text.rindex("(") :]
        raise FormulaError(typed, "a formula without its state", f"Leave out {state}: the solid is meant.")
    if re.search(r"[A-Za-z)]\d\+$", text) and not _SUPERSCRIPT.search(text):
        stem, number = text[:-2], text[-2]
        raise FormulaError(
            typed,
            "a whole salt; and this ending has two readings",
            f"For the ion write {stem}+{number} or {stem}{number.translate(_RAISED)}⁺; for a salt add its anion.",
        )
    if _SUPERSCRIPT.search(text) or "+" in text or "-" in text or "^" in text:
        raise FormulaError(typed, "a neutral salt, not an ion", "Write cation and anion together, e.g. CaCl2.")
    if _OPEN_WATER.search(text):
        raise FormulaError(
            typed,
            "a known number of waters",
            "Write the number, e.g. CaCl2·6H2O, or the anhydrous salt with the lot's water in samples.csv.",
        )
    return text


_RAISED = str.maketrans("0123456789", "⁰¹²³⁴⁵⁶⁷⁸⁹")


def _split(text: str, typed: str) -> list[tuple[str, str]]:
    """Parts between dots as (count in front, body); a point inside a count in front is a decimal point."""
    parts: list[tuple[str, str]] = []
    position = 0
    while position <= len(text):
        number = _NUMBER.match(text, position)
        count = number.group() if number else ""
        position += len(count)
        end = position
        while end < len(text) and text[end] not in "·.":
            end += 1
        body = text[position:end]
        if not body:
            raise FormulaError(typed, "a formula on both sides of the dot", "Write it as in CaCl2·6H2O.")
        parts.append((f"0{count}" if count.startswith(".") else count, body))
        position = end + 1
    return parts


def _value(count: str, typed: str) -> float:
    """A count in front: empty is 1; 8/3 is a fraction."""
    if not count:
        return 1.0
    if "/" in count:
        above, below = count.split("/")
        if int(below) == 0:
            raise FormulaError(typed, "a fraction with a divisor", "Write it as in CdSO4·8/3H2O.")
        value = int(above) / int(below)
    else:
        value = float(count)
    if value == 0 or value > 100:
        raise FormulaError(typed, "a count between 0 and 100 in front of a part", "Leave the part out or correct it.")
    return value


def _counts(body: str, typed: str, *, bare_water: bool = True) -> dict[str, int]:
    """Atoms of one part; a bracketed (H2O) and a part that is nothing but H2O count as water."""
    stack: list[dict[str, int]] = [{}]
    position = 0
    body = body.translate(ROUND)
    while position < len(body):
        token = _TOKEN.match(body, position)
        if token is None:
            raise _unknown(body[position:], typed)
        element, count, opening, closing, group_count = token.groups()
        position = token.end()
        if opening:
            stack.append({})
            continue
        number = _count(count if element else group_count, typed)
        if closing:
            if len(stack) == 1:
                raise FormulaError(typed, "brackets in pairs", "A bracket closes that was not opened.")
            inner = stack.pop()
            if not inner:
                raise FormulaError(typed, "something inside the brackets", "Remove the empty brackets.")
            if inner == {"H": 2, "O": 1}:
                inner = {WATER: 1}
        else:
            if element not in ELEMENTS:
                raise _unknown(element, typed)
            inner = {element: 1}
        top = stack[-1]
        for name, n in inner.items():
            top[name] = top.get(name, 0) + n * number
    if len(stack) > 1:
        raise FormulaError(typed, "brackets in pairs", "A bracket is not closed.")
    if bare_water and stack[0] == {"H": 2, "O": 1}:
        return {WATER: 1}
    return stack[0]


def _count(text: str | None, typed: str) -> int:
    if not text:
        return 1
    if text[0] == "0" or len(text) > 3:
        raise FormulaError(typed, "counts from 1 to 999", f"Correct the count {text}; the letter O is no zero.")
    return int(text)


def _unknown(piece: str, typed: str) -> FormulaError:
    """An element that does not exist, with the nearest spelling that does."""
    recased = _recase(typed)
    if recased:
        return FormulaError(typed, "element symbols in their own case", f"Did you mean {recased}?")
    near = get_close_matches(piece[:2].capitalize(), ELEMENTS, n=1, cutoff=0.6)
    hint = f" Did you mean {near[0]}?" if near and near[0] != piece[:2] else ""
    shown = piece if len(piece) <= 12 else piece[:12] + "…"
    return FormulaError(typed, f"element symbols and counts; “{shown}” is none", f"Write it as in CaCl2·6H2O.{hint}")


def _recase(typed: str) -> str:
    """NACL or nacl to NaCl where two known ions are spelled so; empty where none are."""
    letters = typed.strip()
    if letters not in (letters.upper(), letters.lower()):
        return ""
    from reconcile.chemistry.ions import IONS

    flat = {ion.body.upper(): ion.body for ion in sorted(IONS.values(), key=lambda ion: len(ion.body)) if ion.in_salts}
    split = re.compile(r"(\D.*?)(\d*)$")
    for length in range(len(letters) - 1, 0, -1):
        pieces = []
        for piece in (letters[:length].upper(), letters[length:].upper()):
            bare = split.match(piece)
            if piece in flat:
                pieces.append(flat[piece])
            elif bare and bare.group(1) in flat:
                pieces.append(flat[bare.group(1)] + bare.group(2))
        if len(pieces) == 2:
            return "".join(pieces)
    return ""
