"""The verdict says what the tables hold, in words that claim no more."""

import numpy as np
import pytest

from reconcile.report.verdict import verdict
from reconcile.report.words import counted


def said(results):
    return [sentence.replace("\N{NO-BREAK SPACE}", " ") for sentence in verdict(results)]


def test_six_sentences_with_numbers(invented):
    amount, consistent, suspect, consequence, agree, assumed = said(invented)
    # 14.60 without, 14.91(30) as measured in the hand-built table
    assert "1 salt would move by more than its standard uncertainty" in consequence
    assert "most of all CaCl2·6H2O, by −0.31 kJ/mol" in consequence
    assert amount.startswith("6 of 8 runs of 3 salts give 2 standard enthalpies of solution at 298.15 K")
    assert "from 0.025 to 0.30 kJ/mol" in amount
    assert "No limit is given for Na2CO3" in amount
    assert consistent == (
        "All salts together are consistent with the formation enthalpies of NBS-1982: "
        "χ² = 2.10 for 3 degrees of freedom, p = 0.55."
    )
    assert "compatible with a gain of calorimeter B: −1.23(15) %, 95 % interval −1.53 to −0.93 %" in suspect
    assert "rests on calorimeters and references" in suspect
    assert agree == "1 of 2 salts with a published value agrees with it; CaCl2·6H2O disagrees."
    assert "0.18 kJ/mol" in assumed


def test_a_scatter_that_nobody_knows_is_told(invented):
    assert "too few to tell their own scatter" not in said(invented)[0]
    invented.salts.loc[1, "coverage_factor"] = 3158.0  # 12.7 for one degree of freedom
    assert "The runs of CaCl2·6H2O are too few to tell their own scatter" in said(invented)[0]


def test_no_sentence_names_a_cause(invented):
    assert not any(word in " ".join(said(invented)).lower() for word in ("caused", "because", "proves", "true value"))


def test_nothing_suspicious_says_what_would_have_been_seen(invented):
    invented.bias["p_adjusted"] = [0.2, 0.63]
    sentence = said(invented)[2]
    assert "None of the 2 systematic effects listed reaches an adjusted p below 0.05" in sentence
    assert "a gain of calorimeter B, above 0.66 % would have been found with 80 % power" in sentence


def test_an_adjustment_that_does_not_fit(invented):
    invented.adjustment = {"chi_square": 90.0, "degrees_of_freedom": 12, "p_value": 4e-14}
    assert "are not consistent" in said(invented)[1]
    assert "p = 4.0×10⁻¹⁴" in said(invented)[1]


def test_an_adjustment_that_tests_nothing(invented):
    invented.adjustment = {"chi_square": 0.0, "degrees_of_freedom": 0, "p_value": np.nan}
    assert "was not tested" in said(invented)[1]


def test_other_suspects_are_named(invented):
    invented.bias["p_adjusted"] = [1e-14, 0.01]
    last = said(invented)[2].rpartition("Suspects beside it: ")[2]
    assert last == 'a single spoilt run, <script>alert("x")</script>, −0.20(10) kJ/mol.'


@pytest.mark.parametrize(("number", "text"), [(0, "no runs"), (1, "1 run"), (2, "2 runs")])
def test_counted(number, text):
    assert counted(number, "run") == text
