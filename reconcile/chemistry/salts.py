"""A salt: a formula taken apart into known ions that balance."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from functools import lru_cache
from math import gcd

from reconcile.chemistry.atomic_weights import standard_atomic_weights
from reconcile.chemistry.formula import ROUND, WATER, Formula, FormulaError, read_formula
from reconcile.chemistry.ions import IONS, Ion

MOST_IONS = 5  # different ones in a salt
_CANDIDATES = tuple((frozenset(ion.counts), ion) for ion in IONS.values() if ion.in_salts)


@dataclass(frozen=True, slots=True)
class Salt:
    """A salt as its formula is written; amounts are per formula unit."""

    formula: str  # as typed, plain digits, middle dots, no blanks: CaCl2·6H2O
    ions: tuple[tuple[str, float], ...]  # (("Ca+2", 1.0), ("Cl-", 2.0)); cations first
    charges: tuple[int, ...]  # of these ions
    water: float  # moles of water of hydration
    elements: tuple[tuple[str, float], ...]  # atoms, water of hydration included
    molar_mass: float  # g/mol
    molar_mass_anhydrous: float  # g/mol
    electrolyte: str  # the anhydrous formula rebuilt from the ions: one for all crystals that give the same solution
    charge_type: str  # "1-1", "2-1" (cation 2+, anion 1−), …; "double" with more than two ions
    identity: str  # the same for two spellings of one salt
    reading_note: str = ""  # a remark on how it was read


@lru_cache(maxsize=65536)
def read_salt(typed: str) -> Salt:
    """Read a formula as a salt of known ions.

    Of all sets of ions that make up the atoms the one with the fewest different ions is taken, and it must be
    neutral: KHSO4 is K⁺ and HSO4⁻, AgCs(NO3)2 is Ag⁺, Cs⁺ and 2 NO3⁻.

    Parameters
    ----------
    typed : str
        Any usual spelling; see read_formula.

    Returns
    -------
    salt : Salt

    Raises
    ------
    FormulaError
        If the formula cannot be read, is not made of known ions, or does not balance.

    Examples
    --------
    >>> salt = read_salt("CaCl2.6H2O")
    >>> salt.formula, salt.electrolyte, salt.charge_type, round(salt.molar_mass, 2)
    ('CaCl2·6H2O', 'CaCl2', '2-1', 219.07)
    >>> read_salt("(NH4)2Fe(SO4)2·6H2O").ions
    (('NH4+', 2.0), ('Fe+2', 1.0), ('SO4-2', 2.0))
    """
    formula = read_formula(typed)
    counts = _decompose(formula, typed)
    if gcd(*counts.values()) > 1 and not formula.multiple:
        smaller = _rebuild({ion: n // gcd(*counts.values()) for ion, n in counts.items()})
        raise FormulaError(typed, "the smallest whole formula unit", f"Write {smaller}.")
    ordered = _ordered(counts)
    elements: dict[str, float] = {name: float(number) for name, number in formula.atoms.items()}
    dry_mass = _mass(elements)
    if formula.water:
        elements["H"] = elements.get("H", 0.0) + 2 * formula.water
        elements["O"] = elements.get("O", 0.0) + formula.water
    two = len(ordered) == 2
    return Salt(
        formula=formula.text,
        ions=tuple((ion.name, float(counts[ion])) for ion in ordered),
        charges=tuple(ion.charge for ion in ordered),
        water=formula.water,
        elements=tuple(sorted(elements.items())),
        molar_mass=_mass(elements),
        molar_mass_anhydrous=dry_mass,
        electrolyte=_rebuild(counts),
        charge_type=f"{ordered[0].charge}-{-ordered[1].charge}" if two else "double",
        identity="|".join(f"{ion.name}*{counts[ion]}" for ion in ordered) + f"|{WATER}*{formula.water:.3f}",
        reading_note=_remark(counts, formula),
    )


def _mass(elements: dict[str, float]) -> float:
    weights = standard_atomic_weights()
    return sum(weights[name][0] * number for name, number in elements.items())


def _ordered(ions: Iterable[Ion]) -> list[Ion]:
    """Cations before anions, then by size of charge, then by name."""
    return sorted(ions, key=lambda ion: (ion.charge < 0, abs(ion.charge), ion.name))


def _rebuild(counts: dict[Ion, int]) -> str:
    pieces = []
    for ion in _ordered(counts):
        n = counts[ion]
        pieces.append(ion.body if n == 1 else f"{ion.body}{n}" if ion.monatomic else f"({ion.body}){n}")
    return "".join(pieces)


def _remark(counts: dict[Ion, int], formula: Formula) -> str:
    names = {ion.name for ion in counts}
    if "H+" in names:
        return f"{formula.text} is read as an acid"
    if "OH-" in names:
        return f"{formula.text} is read as a hydroxide"
    return ""


def _decompose(formula: Formula, typed: str) -> dict[Ion, int]:
    """Fewest different ions with these atoms and no charge."""
    text = formula.anhydrous_text.translate(ROUND)
    atoms = formula.atoms
    present = frozenset(atoms)
    acid = text.startswith("H") or text.endswith(("COOH", "CO2H"))
    candidates = [
        ion
        for elements, ion in _CANDIDATES
        if elements <= present
        and all(atoms[name] >= number for name, number in ion.atoms)
        and (not ion.spellings or any(spelling in text for spelling in ion.spellings))
        and (acid or ion.name != "H+")
    ]
    cations = [ion for ion in candidates if ion.charge > 0]
    anions = [ion for ion in candidates if ion.charge < 0]
    if not cations or not anions:
        raise _not_ions(typed, present)
    pairs = list(_pairs(atoms, cations, anions))
    if pairs:
        return _likeliest(pairs, text)
    charged: list[dict[Ion, int]] = []
    for most in range(2, MOST_IONS + 1):
        found = [
            counts
            for counts in _covers(dict(atoms), candidates, most)
            if "H+" not in {ion.name for ion in counts} or _only_cation("H+", counts)
        ]
        neutral = [counts for counts in found if sum(ion.charge * n for ion, n in counts.items()) == 0]
        if neutral:
            return _likeliest(neutral, text)
        charged = charged or [counts for counts in found if len({ion.charge > 0 for ion in counts}) == 2]
    if charged:
        raise _unbalanced(charged, typed)
    raise _not_ions(typed, present)


def _pairs(atoms: dict[str, int], cations: list[Ion], anions: list[Ion]) -> Iterator[dict[Ion, int]]:
    """Neutral salts of one cation and one anion with these atoms: the charges fix the ratio."""
    first = next(iter(atoms))
    for cation in cations:
        for anion in anions:
            shared = gcd(cation.charge, anion.charge)
            plus, minus = -anion.charge // shared, cation.charge // shared
            unit = plus * cation.counts.get(first, 0) + minus * anion.counts.get(first, 0)
            times, odd = divmod(atoms[first], unit) if unit else (0, 1)
            if odd or (cation.name == "H+" and anion.name == "OH-"):
                continue
            plus, minus = plus * times, minus * times
            if all(
                plus * cation.counts.get(name, 0) + minus * anion.counts.get(name, 0) == number
                for name, number in atoms.items()
            ):
                yield {cation: plus, anion: minus}


def _likeliest(found: list[dict[Ion, int]], text: str) -> dict[Ion, int]:
    return min(found, key=lambda counts: (_unlikely(counts, text), [ion.name for ion in _ordered(counts)]))


def _only_cation(name: str, counts: dict[Ion, int]) -> bool:
    return [ion.name for ion in counts if ion.charge > 0] == [name] and all(ion.name != "OH-" for ion in counts)


def _unlikely(counts: dict[Ion, int], text: str) -> int:
    """Ions of several atoms whose usual spelling does not stand in the formula."""
    return sum(ion.body not in text for ion in counts if not ion.monatomic)


def _covers(left: dict[str, int], candidates: list[Ion], most: int) -> Iterator[dict[Ion, int]]:
    """Every way to make up the atoms left from exactly so many different ions."""
    if most == 1:
        for ion in candidates:
            if len(ion.atoms) == len(left):
                n, odd = divmod(left.get(ion.atoms[0][0], 0), ion.atoms[0][1])
                if not odd and n and all(left.get(name) == n * number for name, number in ion.atoms):
                    yield {ion: n}
        return
    candidates = [ion for ion in candidates if all(left.get(name, 0) >= number for name, number in ion.atoms)]
    holders = {name: [ion for ion in candidates if name in ion.counts] for name in left}
    rarest = min(left, key=lambda name: len(holders[name]))
    for position, ion in enumerate(holders[rarest]):
        passed = holders[rarest][: position + 1]  # earlier ones were tried: leave them out, so that no set comes twice
        others = [other for other in candidates if other not in passed] if position or most > 2 else candidates
        for n in range(min(left[name] // number for name, number in ion.atoms), 0, -1):
            rest = {name: count - n * ion.counts.get(name, 0) for name, count in left.items()}
            rest = {name: count for name, count in rest.items() if count}
            if rest:
                yield from ({ion: n, **tail} for tail in _covers(rest, others, most - 1) if ion not in tail)


def _unbalanced(found: list[dict[Ion, int]], typed: str) -> FormulaError:
    """The charges do not add up: name them and the salts that would balance."""
    suggestions = []
    for counts in found:
        cations = [ion for ion in _ordered(counts) if ion.charge > 0]
        anions = [ion for ion in _ordered(counts) if ion.charge < 0]
        if len(cations) == 1 and len(anions) == 1:
            shared = gcd(cations[0].charge, anions[0].charge)
            suggestions.append(
                _rebuild({cations[0]: -anions[0].charge // shared, anions[0]: cations[0].charge // shared})
            )
    counts = found[0]
    charge = sum(ion.charge * n for ion, n in counts.items())
    made = ", ".join(f"{n} {ion.name}" for ion, n in sorted(counts.items(), key=lambda item: item[0].charge < 0))
    remedy = f"Did you mean {' or '.join(dict.fromkeys(suggestions))}?" if suggestions else "Correct the counts."
    return FormulaError(typed, f"ions whose charges balance; {made} leave {charge:+d}", remedy)


def _not_ions(typed: str, present: frozenset[str]) -> FormulaError:
    without = sorted(name for name in present if not any(name in ion.counts for _, ion in _CANDIDATES))
    if without:
        return FormulaError(typed, f"a salt of known ions; none holds {', '.join(without)}", "Correct the formula.")
    return FormulaError(
        typed,
        "a salt of known ions",
        "Write cation and anion, e.g. Ca(NO3)2·4H2O; a certified reaction of another substance has role = standard.",
    )
