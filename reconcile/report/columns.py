"""Every table of the results: its columns, their headings in a file, and what they mean."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

Kind = Literal["text", "number", "integer", "boolean", "list"]


@dataclass(frozen=True, slots=True)
class Column:
    """One column: `key` in the results and in results.json, `heading` in a table's file."""

    key: str
    kind: Kind
    meaning: str
    quantity: str = ""  # as the heading names it; the key where empty
    unit: str = ""  # "" for dimensionless and texts

    @property
    def heading(self) -> str:
        """Quantity / unit, a compound unit in brackets."""
        name = self.quantity or self.key
        if not self.unit:
            return name
        return f"{name} / ({self.unit})" if any(mark in self.unit for mark in "/ ") else f"{name} / {self.unit}"


def _text(key: str, meaning: str) -> Column:
    return Column(key, "text", meaning)


def _number(key: str, meaning: str, unit: str = "", quantity: str = "") -> Column:
    return Column(key, "number", meaning, quantity, unit)


def _molar(key: str, meaning: str, quantity: str = "") -> Column:
    return _number(key, meaning, "kJ/mol", quantity)


_SALT = _text("salt", "formula as weighed")
_SLOPE = "kJ kg^(1/2) mol^(-3/2)"

TABLES: dict[str, tuple[Column, ...]] = {
    "salts": (
        _SALT,
        _number("molar_mass", "of the formula as weighed", "g/mol"),
        _number("temperature", "reference temperature", "K"),
        _molar("standard_enthalpy", "standard molar enthalpy of solution at infinite dilution; empty: no limit"),
        _molar("u", "standard uncertainty of standard_enthalpy", "u(standard_enthalpy)"),
        _number("degrees_of_freedom", "effective, of u; empty: infinite"),
        _number("coverage_factor", "half width of the 95 % interval over u"),
        _molar("interval_low", "lower end of the 95 % interval"),
        _molar("interval_high", "upper end of the 95 % interval"),
        _molar("u_random", "part of u from the scatter and statements of single runs"),
        _molar("u_shared", "the rest of u: calorimeters, lots, slope, dilution parameters"),
        Column("runs", "integer", "runs included"),
        _number("molality_min", "smallest molality measured", "mol/kg"),
        _number("molality_max", "largest molality measured", "mol/kg"),
        _text("dilution_model", "where the parameters of the dilution equation come from"),
        _number("prior_share", "share of the prior in the information on the dilution correction, 0 to 1"),
        _number("prior_conflict_p", "p-value: do the runs contradict the prior?"),
        _number("slope", "Debye–Hückel slope A_H used", _SLOPE),
        _number("free_slope", "the slope that the runs would choose, a diagnostic", _SLOPE),
        _number("u_free_slope", "its standard uncertainty", _SLOPE, "u(free_slope)"),
        _molar("line_m", "what a straight line in m would give at infinite dilution, a diagnostic"),
        _molar("line_root", "the same of a straight line in √m"),
        _number("heat_capacity_change", "of dissolution at infinite dilution", "J/(K mol)"),
        _number("u_heat_capacity_change", "its standard uncertainty", "J/(K mol)", "u(heat_capacity_change)"),
        _molar("between_batch_sd", "standard deviation between batches"),
        _text("verdict", "against published values, in one word"),
        Column("remarks", "list", "what to mind of the extrapolation"),
        _text("reason", "why there is no limit"),
        _molar("standard_enthalpy_without_suspects", "if all significant suspects were taken out; not done"),
        _molar("u_without_suspects", "its standard uncertainty", "u(standard_enthalpy_without_suspects)"),
        _molar("recommended_value", "recommended standard enthalpy of solution"),
        _molar("recommended_u", "its standard uncertainty", "u(recommended_value)"),
        _text("recommended_from", "measured, reconciled or published"),
    ),
    "runs": (
        _text("run", "name of the run"),
        _SALT,
        _text("sample", "lot"),
        _text("calorimeter", "calorimeter"),
        _text("batch", "runs made together"),
        Column("included", "boolean", "false: excluded by the laboratory"),
        _text("reason", "of the exclusion"),
        _number("molality / (mol/kg)", "of the salt over all water"),
        _number("enthalpy / (kJ/mol)", "molar enthalpy of solution at the run's temperature and molality"),
        _number("u(enthalpy) / (kJ/mol)", "its standard uncertainty, all that is stated"),
        _number("dilution_correction / (kJ/mol)", "added to bring the run to infinite dilution"),
        _number("standard_enthalpy / (kJ/mol)", "at the reference temperature and infinite dilution"),
        _number("u(standard_enthalpy) / (kJ/mol)", "its standard uncertainty, dilution and scatter included"),
        _number("standardised_residual", "misfit over its own standard deviation"),
        _number("influence / (kJ/mol)", "standard enthalpy of the salt with the run less that without it"),
        _text("kind", "dissolution in water, successive addition or heat of dilution"),
        _number("initial_molality / (mol/kg)", "of the solvent or solution that the run started from; 0: water"),
    ),
    "reconciled": (
        _SALT,
        _molar("measured", "standard enthalpy of solution before the adjustment"),
        _molar("u_measured", "its standard uncertainty", "u(measured)"),
        _molar("reconciled", "after the adjustment"),
        _molar("u", "its standard uncertainty", "u(reconciled)"),
        _molar("change", "reconciled − measured"),
        _number("standardised_change", "change over its own standard uncertainty"),
        _number("redundancy", "share of the value that the others could replace"),
        _molar("smallest_detectable_error", "found with power 0.8 at level 0.001"),
    ),
    "references": (
        _text("quantity", "kind of reference value"),
        _text("species", "formula with its phase"),
        _molar("published", "value as published"),
        _molar("u_published", "its standard uncertainty", "u(published)"),
        _molar("reconciled", "after the adjustment"),
        _molar("u", "its standard uncertainty", "u(reconciled)"),
        _number("standardised_change", "change over its own standard uncertainty"),
        _text("source", "publication"),
    ),
    "cycles": (
        _SALT,
        _text("kind", "formation, or lattice–hydration"),
        _molar("misclosure", "measured minus what the cycle asks for"),
        _molar("u", "its standard uncertainty", "u(misclosure)"),
        Column("identity", "boolean", "closes by construction, proves nothing"),
        Column("circular", "boolean", "rests on a published enthalpy of solution of the same salt"),
        _molar("smallest_detectable_error", "found with power 0.8 at level 0.001"),
        _text("verdict", "in words"),
    ),
    "bias": (
        _text("hypothesis", "what could be wrong"),
        _text("subject", "with what"),
        _number("size", "estimated size, in the unit of its row"),
        _number("u", "its standard uncertainty, same unit", quantity="u(size)"),
        _text("unit", "of the sizes in this row"),
        _number("interval_low", "lower end of the 95 % interval, same unit"),
        _number("interval_high", "upper end of the 95 % interval, same unit"),
        _number("degrees_of_freedom", "of the test; empty: infinite"),
        _number("statistic", "size over its standard uncertainty under no effect"),
        _number("p_value", "of this hypothesis alone"),
        _number("p_adjusted", "with all tests of the campaign accounted for"),
        _number("delta_chi_square", "by which accepting it lowers χ²"),
        _number("smallest_detectable", "size found with power 0.8 at adjusted p < 0.05, same unit"),
        Column("rests_on", "list", "what makes it testable"),
        Column("confounded_with", "list", "what this campaign cannot tell it from"),
    ),
    "comparison": (
        _SALT,
        _number("molality", "at which the two are compared; 0: infinite dilution", "mol/kg"),
        _molar("measured", "measured enthalpy of solution"),
        _molar("u_measured", "its standard uncertainty", "u(measured)"),
        _molar("published", "published enthalpy of solution"),
        _molar("u_published", "its standard uncertainty", "u(published)"),
        _molar("difference", "measured − published"),
        _number("zeta", "difference over its standard uncertainty"),
        _number("e_n", "difference over its expanded uncertainty"),
        _text("verdict", "by zeta, ISO 13528"),
        _text("source", "publication"),
        _text("status", "how the number was come by"),
        Column("circular", "boolean", "the published value is also in the adjustment"),
    ),
    "budget": (
        _SALT,
        _text("source", "named error source"),
        _molar("contribution", "its share of u; the root of the sum of squares is u"),
    ),
    "assumptions": (
        _text("text", "what was assumed"),
        _text("affects", "whom it concerns"),
        _molar("u_contribution", "what it adds to the uncertainty, where known"),
    ),
    "sources": (
        _text("quantity", "kind of reference value"),
        _text("species", "formula"),
        _number("value", "as used, in the unit of its row"),
        _number("u", "its standard uncertainty, same unit", quantity="u(value)"),
        _text("unit", "of value and u in this row"),
        _text("source", "publication"),
        _text("year", "of the publication"),
        _text("status", "how the number was come by"),
        _text("used_for", "where it entered"),
    ),
    "smoothed": (
        _SALT,
        _number("molality", "round molality", "mol/kg"),
        _molar("enthalpy", "smoothed molar enthalpy of solution"),
        _molar("u", "its standard uncertainty", "u(enthalpy)"),
    ),
    "parameters": (
        _SALT,
        _text("parameter", "of the dilution equation"),
        _number("value", "estimate"),
        _number("u", "its standard uncertainty", quantity="u(value)"),
    ),
    "covariance": (
        _text("source", "shared source; empty: the salt's private part"),
        _SALT,
        _molar("loading", "kJ/mol for one standard deviation of the source; covariance = Σ loading loadingᵀ"),
    ),
}
PRIMARY_KEYS: dict[str, tuple[str, ...]] = {"salts": ("salt",), "runs": ("run",), "reconciled": ("salt",)}
