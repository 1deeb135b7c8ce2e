"""The tables against each other, and how many rows they have: the pages of reference_data/README.md.

Anyone may write them anew: python -m reconcile.reference.consistency
"""

from __future__ import annotations

import sys
from collections.abc import Callable, Mapping, Sequence
from pathlib import Path

import numpy as np
import pandas as pd

from reconcile.chemistry import Salt, read_salt
from reconcile.chemistry.folder import tables_folder
from reconcile.reference.formation import formation_enthalpies
from reconcile.reference.lattice import lattice_spread
from reconcile.reference.limits import is_limit
from reconcile.reference.tables import rows, table, table_names

CLOSES = 0.5  # kJ/mol, where a check of our own transcription calls a cycle closed
# (set of the ions, set of the crystals); the last is a mixture and stands there as a warning
PAIRS = (("NBS-1982", "NBS-1982"), ("CRC", "CRC"), ("CODATA", "CRC"))

# Why a cycle of one set fails, salt by salt, as far as it is known.
REASONS = {
    ("NBS-1982", "NaCN"): "open: both sets agree with each other and not with Parker",
    ("NBS-1982", "KOH·H2O"): "the crystal is from memory without a second reading",
    ("NBS-1982", "KNO2"): "nitrite is tabulated to 0.1; Parker's value is from memory",
    ("NBS-1982", "RbOH"): "Parker's value is from memory; the CRC set closes with another crystal",
    ("NBS-1982", "RbI"): "open: Parker's value is from memory, both sets miss it alike",
    ("NBS-1982", "CsOH"): "Parker's value is from memory",
    ("NBS-1982", "CsF"): "Parker's value is from memory",
    ("CRC", "LiOH"): "a newer crystal beside ions of the NBS tables",
    ("CRC", "NaF"): "a newer crystal beside ions of the NBS tables",
    ("CRC", "NaCN"): "open: both sets agree with each other and not with Parker",
    ("CRC", "KNO2"): "Parker's value is from memory",
    ("CRC", "KCN"): "cyanide hydrolyses",
    ("CRC", "RbI"): "open: Parker's value is from memory, both sets miss it alike",
    ("CRC", "CsOH"): "Parker's value is from memory",
    ("CRC", "CsF"): "Parker's value is from memory",
}


def cycle_differences(ions_of: str = "NBS-1982", crystals_of: str = "NBS-1982") -> pd.DataFrame:
    """Ions (+ h H2O) minus crystal, less the measured enthalpy of solution that is tabulated.

    Parameters
    ----------
    ions_of, crystals_of : str
        Sets of formation enthalpies; different ones only to show what mixing does.

    Returns
    -------
    frame : DataFrame
        A row a salt of Parker's table that both hold: salt, tabulated, cycle, difference, u / (kJ/mol), circular,
        status (of the tabulated value). u is the quadrature of all that enter.
    """
    ions, crystals = formation_enthalpies(ions_of), formation_enthalpies(crystals_of)
    crystals = crystals[crystals["phase"].eq("cr")].set_index("identity")
    aqueous = ions[ions["phase"].eq("aq")].set_index("species")
    liquid = ions[ions["species"].eq("H2O")]
    published = _parker()
    salts = [read_salt(formula) for formula in published["salt"]]
    keep = [salt.identity in crystals.index and all(ion in aqueous.index for ion, _ in salt.ions) for salt in salts]
    salts = [salt for salt, kept in zip(salts, keep, strict=True) if kept]
    published = published[keep].reset_index(drop=True)
    crystal = crystals.loc[[salt.identity for salt in salts]].reset_index(drop=True)
    water = np.array([salt.water for salt in salts])
    dissolved, variance = _sum_of_ions(salts, aqueous)
    h, u_h = float(liquid["value"].iloc[0]), float(liquid["u"].iloc[0])
    cycle = dissolved + water * h - crystal["value"].to_numpy()
    variance = variance + (water * u_h) ** 2 + crystal["u"].to_numpy() ** 2 + published["u"].to_numpy() ** 2
    return pd.DataFrame(
        {
            "salt": published["salt"],
            "tabulated": published["value"],
            "cycle": cycle,
            "difference": (cycle - published["value"].to_numpy()).round(9),
            "u": np.sqrt(variance),
            "circular": crystal["circular"],
            "status": published["status"],
        }
    )


def _parker() -> pd.DataFrame:
    """Salts of Parker's table at infinite dilution: salt, value, u / (kJ/mol), status."""
    value, u = "solution_enthalpy / (kJ/mol)", "u(solution_enthalpy) / (kJ/mol)"
    kept = [
        (row["salt"], row[value], row[u], row["status"])
        for row in rows("solution_enthalpy")
        if is_limit(row) and row["reference_set"] == "Parker-1965" and row["phase"] == "cr"
    ]
    return pd.DataFrame(kept, columns=["salt", "value", "u", "status"])


def _sum_of_ions(salts: Sequence[Salt], aqueous: pd.DataFrame) -> tuple[np.ndarray, np.ndarray]:
    row = np.array([i for i, salt in enumerate(salts) for _ in salt.ions])
    count = np.array([number for salt in salts for _, number in salt.ions])
    held = aqueous.loc[[ion for salt in salts for ion, _ in salt.ions]]
    total = np.bincount(row, count * held["value"].to_numpy(), len(salts))
    return total, np.bincount(row, (count * held["u"].to_numpy()) ** 2, len(salts))


def counts_page() -> str:
    """Table of rows, rows by status, rows with u, and sources, a line a file (Markdown)."""
    lines = [
        "| file | rows | read | recalled | derived | with u | of these stated | sources |",
        "|---|---|---|---|---|---|---|---|",
    ]
    for name in table_names():
        frame = table(name)
        status = frame["status"].value_counts()
        with_u = frame["u_basis"].ne("none")
        stated = frame["u_basis"].str.startswith("stated")
        cells = [f"{name}.csv", len(frame), *(int(status.get(word, 0)) for word in ("read", "recalled", "derived"))]
        cells += [int(with_u.sum()), int(stated.sum()), frame["source"].nunique()]
        lines.append("| " + " | ".join(str(cell) for cell in cells) + " |")
    return "\n".join(lines)


def consistency_page() -> str:
    """How far ions minus crystal and the tabulated enthalpies of solution agree (Markdown)."""
    lines = [
        f"Ions (with water) minus crystal, against Parker 1965; a cycle counts as closed within {CLOSES} kJ/mol.",
        "",
        "| ions | crystals | salts | closed | median difference / (kJ/mol) | circular: no evidence |",
        "|---|---|---|---|---|---|",
    ]
    for ions_of, crystals_of in PAIRS:
        frame = cycle_differences(ions_of, crystals_of)
        size = frame["difference"].abs()
        mixed = "" if ions_of == crystals_of else " (mixed: a warning, never used)"
        lines.append(
            f"| {ions_of} | {crystals_of}{mixed} | {len(frame)} | {int((size <= CLOSES).sum())} | {size.median():.2f} "
            f"| {int(frame['circular'].eq('likely').sum())} |"
        )
    for set_name in ("NBS-1982", "CRC"):
        frame = cycle_differences(set_name, set_name)
        apart = frame[(frame["difference"].abs() > CLOSES) | (frame["difference"].abs() > 2 * frame["u"])]
        lines += [
            "",
            f"{set_name}: salts more than {CLOSES} kJ/mol or more than 2 u apart. u is mostly estimated.",
            "",
            "| salt | tabulated | status | cycle − tabulated / (kJ/mol) | u / (kJ/mol) | difference/u | reason |",
            "|---|---|---|---|---|---|---|",
        ]
        for row in apart.to_dict("records"):
            gap, u = row["difference"], row["u"]
            reason = REASONS.get((set_name, str(row["salt"])), "not known")
            lines.append(
                f"| {row['salt']} | {row['tabulated']:.2f} | {row['status']} | {gap:+.2f} | {u:.2f} "
                f"| {gap / u:+.1f} | {reason} |"
            )
    return "\n".join(lines)


def lattice_page() -> str:
    """How far lattice potential energies from sizes lie from those of the cycles, by class (Markdown)."""
    lines = [
        "Computed over tabulated (Σν gaseous ions − crystal, taken to U_pot) less 1: its median, and about it the",
        "robust standard deviation that serves as relative standard uncertainty; for all salts with the scatter of the",
        "offsets.",
        "",
        "| method | class | salts | offset / % | spread / % | farthest from the offset / % |",
        "|---|---|---|---|---|---|",
    ]
    for row in lattice_spread().reset_index().to_dict("records"):
        lines.append(
            f"| {row['method']} | {row['class']} | {row['salts']} | {100 * row['offset']:+.1f} "
            f"| {100 * row['spread']:.1f} | {row['farthest']} {100 * row['largest']:.0f} |"
        )
    return "\n".join(lines)


PAGES: Mapping[str, Callable[[], str]] = {
    "counts": counts_page,
    "consistency": consistency_page,
    "lattice": lattice_page,
}


def between_markers(text: str, name: str, page: str) -> str:
    """The text with a page put between <!-- name: begin --> and <!-- name: end -->.

    Raises
    ------
    ValueError
        If a marker is missing.
    """
    begin, end = f"<!-- {name}: begin -->", f"<!-- {name}: end -->"
    if begin not in text or end not in text:
        raise ValueError(f"README.md has no markers {begin} and {end}; put both on lines of their own")
    before, rest = text.split(begin, 1)
    after = rest.split(end, 1)[1]
    return f"{before}{begin}\n{page}\n{end}{after}"


def up_to_date(text: str) -> str:
    """README.md with every page as the tables give it now."""
    for name, page in PAGES.items():
        text = between_markers(text, name, page())
    return text


def main(folder: Path | None = None) -> int:
    """Write the pages into README.md of the tables' folder; says whether they had changed."""
    readme = (folder or tables_folder()) / "README.md"
    before = readme.read_text(encoding="utf-8")
    after = up_to_date(before)
    if after != before:
        readme.write_text(after, encoding="utf-8")
    sys.stdout.write(f"{readme}: {'written' if after != before else 'unchanged'}\n")
    return 0


if __name__ == "__main__":
    sys.exit(main())
