"""Change of the heat capacity on dissolving, of one salt: which values a report takes."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from math import nan, sqrt

from reconcile.chemistry import Salt
from reconcile.reference.checking import Row
from reconcile.reference.identities import STATUS_ORDER, identity
from reconcile.reference.tables import rows

# SH88 sums of ions lie nearer to values measured for salts than the older CRC ions: NaCl −85.3 against −83.8.
SET_ORDER = {"modern": 0, "SH88": 1, "CRC": 2, "NBS-1982": 3}
VALUE, U = "heat_capacity / (J/(K mol))", "u(heat_capacity) / (J/(K mol))"
Terms = list[tuple[float, Row]]  # moles of each part, what is held of it


@dataclass(frozen=True, slots=True)
class HeatCapacityChange:
    """ΔsolC_p° of one salt at 298.15 K; NaN and "" where a part is missing."""

    value: float = nan  # J/(K mol)
    u: float = nan
    source: str = ""  # which parts
    status: str = ""  # derived, or recalled where a part is from memory


@lru_cache(maxsize=1)
def _held() -> dict[tuple[str, str, str], Row]:
    """By state, species and set ("" for the best set): the row to take."""
    best: dict[tuple[str, str, str], Row] = {}
    for row in sorted(rows("heat_capacity"), key=_rank):
        solid = row["state"] in ("crystal", "salt, infinite dilution")
        species = identity(row["species"]) if solid else row["species"]
        for which in ("", row["reference_set"]):
            best.setdefault((row["state"], species, which), row)
    return best


def _rank(row: Row) -> tuple[int, int]:
    """Of crystals and liquids a read value first; of dissolved species the better set first."""
    ranks = STATUS_ORDER[row["status"]], SET_ORDER.get(row["reference_set"], len(SET_ORDER))
    return ranks if row["state"] in ("crystal", "liquid") else ranks[::-1]


@lru_cache(maxsize=65536)
def heat_capacity_change(salt: Salt) -> HeatCapacityChange:
    """Dissolved salt + h H2O(l) − crystal; the dissolved salt measured, else the sum of its ions, all of one set."""
    held = _held()
    crystal = held.get(("crystal", salt.identity, ""))
    parts, dissolved = _dissolved(salt)
    if crystal is None or not dissolved:
        return HeatCapacityChange()
    terms = [*dissolved, (-1.0, crystal)]
    if salt.water:
        terms.append((salt.water, held["liquid", "H2O", ""]))
    recalled = any(row["status"] == "recalled" for _, row in terms)
    return HeatCapacityChange(
        value=sum(moles * row[VALUE] for moles, row in terms),
        u=sqrt(sum((moles * row[U]) ** 2 for moles, row in terms)),
        source=f"{parts}{' + water' if salt.water else ''} - crystal",
        status="recalled" if recalled else "derived",
    )


def _dissolved(salt: Salt) -> tuple[str, Terms]:
    """The dissolved salt's value, or its ions of one set; no terms where neither is held."""
    held = _held()
    anhydrous = salt.identity.rsplit("|", 1)[0] + "|H2O*0.000"
    own = held.get(("salt, infinite dilution", anhydrous, ""))
    if own is not None:
        return "dissolved salt", [(1.0, own)]
    for which in ("SH88", "CRC"):
        ions = [(moles, held.get(("ion, infinite dilution", ion, which))) for ion, moles in salt.ions]
        terms = [(moles, row) for moles, row in ions if row is not None]
        if len(terms) == len(ions):
            return f"ions ({which})", terms
    return "", []
