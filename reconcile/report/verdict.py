"""The verdict: what the tables say, in a few sentences with numbers."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pandas as pd

from reconcile.report.markup import minus
from reconcile.report.results import Results, rows, whole_test
from reconcile.report.rounding import interval_at, probability, rounded, significant
from reconcile.report.words import counted, listed

LEVEL = 0.05  # of every test spoken of here
LOOSE = 12.8  # coverage factor beyond which fewer than one degree of freedom stands behind u (Student's t)
MOST_NAMED = 5  # suspects named beside the first
_NAMED = {  # hypothesis ─► words for it, {} being its subject
    "gain": "a gain of calorimeter {}",
    "parasitic heat": "a parasitic heat of calorimeter {}",
    "drift": "a drift with the date, {}",
    "batch": "an offset of batch {}",
    "operator": "an offset of operator {}",
    "lot water": "water in the lot {}",
    "lot hydration": "partial hydration of the lot {}",
    "run": "a single spoilt run, {}",
    "reference": "a wrong reference value, {}",
}
_STUCK = "\N{NO-BREAK SPACE}"


def verdict(results: Results) -> list[str]:
    """A few sentences, each on one question: how much, consistent, suspect, what of it, agreeing, assumed.

    Parameters
    ----------
    results : Results
        Of the chain.

    Returns
    -------
    sentences : list of str
        Plain text; nothing in it is computed, only counted and worded.
    """
    sentences = (
        _amount(results),
        _consistency(results),
        _suspicion(results.bias),
        _consequence(results),
        _agreement(results.salts),
        _assumed(results.assumptions),
    )
    return [_kept_together(sentence) for sentence in sentences if sentence]


def _kept_together(sentence: str) -> str:
    """The sentence with no line end inside `p = 0.27` or before a unit."""
    sentence = sentence.replace("= below", "below").replace("p below", f"p{_STUCK}below")
    for text in (" = ", " kJ/mol", " K,", " %"):
        sentence = sentence.replace(text, text.replace(" ", _STUCK))
    return sentence


def sized(row: dict[str, Any], key: str = "size") -> str:
    """A size of a bias row with its unit; a pure number in per cent."""
    value, u, unit = float(row[key]), float(row["u"]), str(row["unit"])
    scale, shown = (100.0, "%") if unit in ("", "1") else (1.0, unit)
    number = rounded(scale * value, scale * u) if key == "size" else significant(scale * value, 2)
    return f"{minus(number)}{_STUCK}{shown}"


def sized_interval(row: dict[str, Any], joiner: str = " to ") -> str:
    """The 95 % interval of a bias row with its unit."""
    unit = str(row["unit"])
    scale, shown = (100.0, "%") if unit in ("", "1") else (1.0, unit)
    low, high = interval_at(scale * row["interval_low"], scale * row["interval_high"], scale * row["u"])
    return f"{minus(low)}{joiner}{minus(high)}{_STUCK}{shown}"


def named(row: dict[str, Any]) -> str:
    """A hypothesis with its subject, as one reads it in a sentence."""
    pattern = _NAMED.get(str(row["hypothesis"]), f"{row['hypothesis']} ({{}})")
    return pattern.replace("{}", str(row["subject"]))


def _amount(results: Results) -> str:
    salts = results.salts
    given = salts[np.isfinite(salts["standard_enthalpy"].to_numpy(float))]
    included, total = int(salts["runs"].sum()), len(results.campaign.runs)
    if total == 1:
        runs = "The one run" if included else "No run"
    else:
        runs = f"All {counted(total, 'run')}" if included == total else f"{included} of {counted(total, 'run')}"
    give = "gives" if total == 1 or included == 1 else "give"
    given_ones = counted(len(given), "standard enthalpy", "standard enthalpies")
    temperature = f"{results.campaign.reference_temperature:g} K"
    text = f"{runs} of {counted(len(salts), 'salt')} {give} {given_ones} of solution at {temperature}"
    u = given["u"].to_numpy(float)
    if len(u) > 1:
        text += f", with standard uncertainties from {significant(u.min(), 2)} to {significant(u.max(), 2)} kJ/mol"
    elif len(u):
        text += f", with a standard uncertainty of {significant(u[0], 2)} kJ/mol"
    loose = [str(s) for s in given["salt"][given["coverage_factor"].to_numpy(float) > LOOSE]]
    if loose:
        whose = "its" if len(loose) == 1 else "their"
        text += (
            f". The runs of {listed(loose)} are too few to tell their own scatter: {whose} interval is what counts, "
        )
        text += "for it goes far beyond what u says"
    without = [str(s) for s in salts["salt"][~np.isfinite(salts["standard_enthalpy"].to_numpy(float))]]
    if without:
        text += f". No limit is given for {listed(without)}; the reason stands with the salt"
    return text + "."


def _consistency(results: Results) -> str:
    test = whole_test(results)
    freedom, p = test["degrees_of_freedom"], test["p_value"]
    where = f"the formation enthalpies of {results.campaign.formation_set}"
    if not (freedom > 0 and math.isfinite(p)):
        return f"No cycle with {where} is closed by more than one independent way, so their consistency was not tested."
    degrees = "degree of freedom" if freedom == 1 else "degrees of freedom"
    numbers = f"χ² = {significant(test['chi_square'], 3)} for {freedom:g} {degrees}, p = {probability(p)}"
    if p >= LEVEL:
        return f"All salts together are consistent with {where}: {numbers}."
    wrong = "something is wrong by more than its stated uncertainty"
    return f"All salts together are not consistent with {where}: {numbers}; {wrong}."


def _suspicion(bias: pd.DataFrame) -> str:
    found = rows(bias)
    if not found:
        return "No hypothesis of a systematic effect could be tested on this campaign."
    first = found[0]
    serious = [row for row in found if row["p_adjusted"] < LEVEL]
    if not serious:
        text = f"None of the {counted(len(found), 'systematic effect')} listed reaches an adjusted p below 0.05"
        if math.isfinite(first["smallest_detectable"]):
            size = sized(first, "smallest_detectable")
            text += f"; {named(first)}, above {size} would have been found with 80 % power"
        return text + "."
    text = (
        f"The measurements are compatible with {named(first)}: {sized(first)}, 95 % interval {sized_interval(first)}, "
        f"adjusted p = {probability(first['p_adjusted'])}"
    )
    text += f"; this rests on {listed(first['rests_on'])}" if len(first["rests_on"]) else ""
    if len(first["confounded_with"]):
        text += f" and cannot be told from {listed(first['confounded_with'])} here"
    if len(serious) == 1:
        return text + "."
    named_ones = [f"{named(row)}, {sized(row)}" for row in serious[1 : 1 + MOST_NAMED]]
    left = len(serious) - 1 - len(named_ones)
    return f"{text}. Suspects beside it: {'; '.join(named_ones)}" + (f"; and {left} more." if left else ".")


def _consequence(results: Results) -> str:
    """What the significant suspects would do to the table of salts; "" where there is none."""
    if not (results.bias["p_adjusted"] < LEVEL).any():
        return ""
    salts = results.salts
    change = (salts["standard_enthalpy_without_suspects"] - salts["standard_enthalpy"]).to_numpy(float)
    part = np.abs(np.nan_to_num(change)) / salts["u"].to_numpy(float)
    beyond = int(np.count_nonzero(part > 1))
    if not beyond:
        return "If they are real, no salt would move by more than its standard uncertainty."
    worst = int(np.nanargmax(part))
    size = significant(change[worst], 2)
    return (
        f"The values and intervals of the table are as measured, with nothing taken out: if the suspects are real, "
        f"{counted(beyond, 'salt')} would move by more than {'its' if beyond == 1 else 'their'} standard uncertainty, "
        f"most of all {salts['salt'].iloc[worst]}, by {minus(size)} kJ/mol; the second table under Suspects gives all."
    )


def _agreement(salts: pd.DataFrame) -> str:
    count = salts["verdict"].value_counts().to_dict()
    compared = sum(count.get(word, 0) for word in ("agrees", "questionable", "disagrees"))
    if not compared:
        return "There is no published value to compare with."
    agreeing = count.get("agrees", 0)
    if agreeing == compared:
        all_of_them = "The one salt" if compared == 1 else f"All {compared} salts"
        text = f"{all_of_them} with a published value {'agrees' if compared == 1 else 'agree'} with it"
    else:
        text = f"{agreeing or 'None'} of {counted(compared, 'salt')} with a published value"
        text += f" {'agree' if agreeing > 1 else 'agrees'} with it"
    for word, one, many in (
        ("questionable", "is questionable", "are questionable"),
        ("disagrees", "disagrees", "disagree"),
    ):
        names = [str(s) for s in salts["salt"][salts["verdict"] == word]]
        if names:
            text += f"; {listed(names)} {one if len(names) == 1 else many}"
    missing = count.get("no reference", 0)
    return text + (f"; {counted(missing, 'salt')} {'has' if missing == 1 else 'have'} none." if missing else ".")


def _assumed(assumptions: pd.DataFrame) -> str:
    if not len(assumptions):
        return "Nothing had to be assumed."
    number = len(assumptions)
    text = f"{counted(number, 'assumption')} {'was' if number == 1 else 'were'} made"
    size = assumptions["u_contribution"].to_numpy(float)
    if np.isfinite(size).any():
        largest = int(np.nanargmax(np.where(np.isfinite(size), size, -1.0)))
        words = str(assumptions["text"].iloc[largest]).rstrip(".")
        text += f"; the largest known effect, {significant(size[largest], 2)} kJ/mol, is that of “{words}”"
    return text + "."
