"""The ions that salts are made of: name, charge, composition."""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from types import MappingProxyType

from reconcile.chemistry.formula import FormulaError, count_atoms

# Names are body and charge: Ca+2, SO4-2, Na+. After "=" stand the spellings by which a cation of several atoms is
# known in a formula: its atoms alone are no proof (urea has those of ammonium cyanate).
_CATIONS = """
    H+ Li+ Na+ K+ Rb+ Cs+ Ag+ Cu+ Tl+ In+ NH4+=NH4 N2H5+=N2H5 NH3OH+=NH3OH CH3NH3+=CH3NH3,CH6N
    (CH3)2NH2+=(CH3)2NH2,C2H8N (CH3)3NH+=(CH3)3NH,C3H10N N(CH3)4+=N(CH3)4,(CH3)4N,C4H12N
    C2H5NH3+=C2H5NH3,CH3CH2NH3 N(C2H5)4+=N(C2H5)4,(C2H5)4N,C8H20N N(C3H7)4+=N(C3H7)4,(C3H7)4N,C12H28N
    N(C4H9)4+=N(C4H9)4,(C4H9)4N,C16H36N C(NH2)3+=C(NH2)3,CH6N3 C5H14NO+=C5H14NO C5H5NH+=C5H5NH,C5H6N
    (HOCH2)3CNH3+=(HOCH2)3CNH3,C4H12NO3
    Be+2 Mg+2 Ca+2 Sr+2 Ba+2 Ra+2 V+2 Cr+2 Mn+2 Fe+2 Co+2 Ni+2 Cu+2 Zn+2 Cd+2 Hg+2 Hg2+2 Sn+2 Pb+2 Pd+2 Pt+2
    Eu+2 Sm+2 Yb+2 VO+2=VO UO2+2=UO2
    Al+3 Ga+3 In+3 Tl+3 Bi+3 Sc+3 Y+3 La+3 Ce+3 Pr+3 Nd+3 Sm+3 Eu+3 Gd+3 Tb+3 Dy+3 Ho+3 Er+3 Tm+3 Yb+3 Lu+3
    Ti+3 V+3 Cr+3 Mn+3 Fe+3 Co+3 Rh+3 Au+3 U+3
    Ce+4 Th+4 U+4 Zr+4 Hf+4
"""
_ANIONS = """
    F- Cl- Br- I- HF2- OH- SH- HSe- CN- OCN- SCN- SeCN- N3- NO2- NO3- ClO- ClO2- ClO3- ClO4- BrO- BrO3- BrO4-
    IO- IO3- IO4- MnO4- ReO4- BF4- BH4- BO2- B(OH)4- PF6- AsF6- SbF6- AlO2- Al(OH)4- AlF4- AsO2- VO3-
    HCO3- HSO3- HSO4- HSeO3- HSeO4- NH2SO3- FSO3- H2PO2- H2PO3- H2PO4- H2AsO3- H2AsO4- H3P2O7- HCrO4-
    AuCl4- Au(CN)2- Ag(CN)2- HCOO- CH3COO- CH2ClCOO- CCl3COO- CF3COO- C2H5COO- C3H7COO- C6H5COO- HC2O4- CH2OHCOO-
    C3H5O3- CH3SO3- CF3SO3- CH3SO4- C6H5SO3- C7H7SO3- C7H5O3- HC4H4O6- HC8H4O4- H2C6H5O7- B(C6H5)4- C6H2N3O7-
    S-2 S2-2 Se-2 CO3-2 SO3-2 SO4-2 S2O3-2 S2O4-2 S2O5-2 S2O6-2 S2O7-2 S2O8-2 S4O6-2 SeO3-2 SeO4-2 TeO3-2 TeO4-2
    CrO4-2 Cr2O7-2 MoO4-2 WO4-2 MnO4-2 FeO4-2 HPO3-2 HPO4-2 HAsO4-2 PO3F-2 H2P2O7-2 SiO3-2 SiF6-2 GeF6-2 TiF6-2
    ZrF6-2 SnCl6-2 PtCl4-2 PtCl6-2 PdCl4-2 IrCl6-2 MoCl6-2 B4O7-2 BeO2-2 ZnO2-2 SnO3-2 C2O4-2 C3H2O4-2 C4H4O4-2
    C4H4O6-2 C4H4O5-2 C4H2O4-2 C8H4O4-2 HC6H5O7-2 Ni(CN)4-2 Pt(CN)4-2 Zn(CN)4-2 Cd(CN)4-2 Hg(CN)4-2 HgI4-2
    Fe(CN)5NO-2
    PO4-3 AsO4-3 VO4-3 BO3-3 P3O9-3 HP2O7-3 AlF6-3 FeF6-3 Fe(CN)6-3 Co(CN)6-3 Cr(CN)6-3 C6H5O7-3 Co(NO2)6-3
    P2O7-4 P4O12-4 Fe(CN)6-4 SiO4-4 P3O10-5 Mo7O24-6
"""
# Known to tables, but no parts of a salt as it is written: gas ions, and what ions become in water.
_ELSEWHERE = """
    H- O-2 NH2- Re- AlOH+2 CrOH+2 FeOH+ FeOH+2 MnOH+ NiOH+ HgOH+ In(OH)2+ InOH+2 ScOH+2 SnOH+ Te(OH)3+ Th(OH)+3
    Th(OH)2+2 Pa+4
"""
_NAME = re.compile(r"(.+?)([+-])(\d*)$")
_RAISED = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻₀₁₂₃₄₅₆₇₈₉−–", "0123456789+-0123456789--")


@dataclass(frozen=True, slots=True, eq=False)  # each is one object of the list
class Ion:
    """One ion of the list."""

    name: str  # Ca+2
    body: str  # Ca
    charge: int
    atoms: tuple[tuple[str, int], ...]  # sorted by element
    in_salts: bool  # whether formulae are read with it
    spellings: tuple[str, ...] = ()  # of which one must stand in the formula
    counts: dict[str, int] = field(default_factory=dict, repr=False)

    @property
    def monatomic(self) -> bool:
        """One atom: needs no brackets before a count."""
        return len(self.atoms) == 1 and self.atoms[0][1] == 1


def _read_list() -> dict[str, Ion]:
    ions: dict[str, Ion] = {}
    for block, in_salts in ((_CATIONS, True), (_ANIONS, True), (_ELSEWHERE, False)):
        for entry in block.split():
            name, _, spellings = entry.partition("=")
            body, charge = _body_and_charge(name)
            counts = count_atoms(body)
            known_as = tuple(spellings.split(",")) if spellings else ()
            ions[name] = Ion(name, body, charge, tuple(sorted(counts.items())), in_salts, known_as, counts)
    return ions


def _body_and_charge(name: str) -> tuple[str, int]:
    match = _NAME.match(name)
    if match is None:
        raise FormulaError(name, "an ion with its charge", "Write it as in Ca+2, SO4-2 or Na+.")
    body, sign, size = match.groups()
    return body, (1 if sign == "+" else -1) * int(size or 1)


IONS: MappingProxyType[str, Ion] = MappingProxyType(_read_list())
_BY_ATOMS: dict[tuple[tuple[tuple[str, int], ...], int], Ion] = {}
for _ion in IONS.values():
    _BY_ATOMS.setdefault((_ion.atoms, _ion.charge), _ion)


def read_ion(typed: str) -> Ion:
    """An ion of the list from any usual spelling: SO4-2, SO4^2-, SO4²⁻, Ca+2, Ca²⁺, CHO2-.

    Raises
    ------
    FormulaError
        If it is no ion, has two readings (Ca2+), or is not in the list.

    Examples
    --------
    >>> [read_ion(text).name for text in ("SO4^2-", "Ca²⁺", "CHO2-", "HS-")]
    ['SO4-2', 'Ca+2', 'HCOO-', 'SH-']
    """
    text = "".join(str(typed).split())
    raised = re.search(r"([⁰¹²³⁴⁵⁶⁷⁸⁹]*)([⁺⁻])$", text)
    caret = re.search(r"\^\{?(\d*)([+-])(\d*)\}?$", text.translate(_RAISED))
    if raised:
        size, sign = (part.translate(_RAISED) for part in raised.groups())
        name = f"{text[: raised.start()].translate(_RAISED)}{sign}{size}"
    elif caret:
        size, sign, after = caret.groups()
        name = f"{text.translate(_RAISED)[: caret.start()]}{sign}{size or after}"
    else:
        name = text.translate(_RAISED)
        ends = re.search(r"^([A-Z][a-z]?)(\d)\+$", name)
        if ends:
            body, size = ends.groups()
            raise FormulaError(typed, "an ending with one reading", f"Write {body}+{size} or {body}^{size}+.")
    if name.endswith(("+1", "-1")):
        name = name[:-1]
    if name in IONS and name not in ("HS-",):
        return IONS[name]
    body, charge = _body_and_charge(name)
    body = body.translate(str.maketrans("[]{}", "()()"))
    try:
        ion = _BY_ATOMS.get((tuple(sorted(count_atoms(body).items())), charge))
    except FormulaError:
        ion = None
    if ion is None:
        near = nearest_ion(name)
        remedy = f"Did you mean {near}?" if near else "The list stands in reconcile/chemistry/ions.py."
        raise FormulaError(typed, "a known ion", remedy)
    return ion


def nearest_ion(name: str) -> str:
    """The known ion that is spelled most like this, or empty."""
    from difflib import get_close_matches

    near = get_close_matches(name, IONS, n=1, cutoff=0.5)
    return near[0] if near else ""
