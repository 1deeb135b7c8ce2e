"""54 dissolution runs of NaCl at three temperatures, traps and all, to infinite dilution.

N. Hubert, R. Solimando, A. Pere, L. Schuffenecker, Thermochim. Acta 294 (1997) 157, Tables 1-3; 2 % stated for all
runs. Amounts in mol, molality as printed, heat in J. T1-27 and T2-14 end above saturation; T2-02 contradicts itself.
"""

import numpy as np
import pandas as pd
import pytest

M_NACL, M_WATER = 58.443, 18.015  # g/mol, IUPAC 2021 standard weights (from memory)
STATED = 0.02

RUNS = {  # temperature / K ─► water / mol, salt / 10⁻³ mol, molality / (mol/kg), heat / J
    297.55: """
        0.2798 0.323 0.0642 1.33     0.2839 0.611 0.1194 2.63     0.2797 1.016 0.2017 4.45     0.2754 1.692 0.3411 7.27
        0.2937 2.490 0.4705 10.46    0.2222 2.288 0.5716 9.49     0.2720 3.018 0.6160 12.34    0.2798 3.566 0.7075 14.62
        0.2841 4.372 0.8542 17.03    0.2779 4.468 0.8923 17.82    0.2744 4.630 0.9366 18.48    0.2775 4.738 0.9477 18.53
        0.2602 5.157 1.1003 19.32    0.2223 5.251 1.3115 19.10    0.2263 6.781 1.6629 23.34    0.2730 9.981 2.0294 31.75
        0.1640 6.853 2.3201 20.86    0.2708 12.371 2.5359 35.85  0.0835 4.185 2.7820 11.66  0.2234 12.215 3.0350 32.78
        0.1943 11.979 3.4221 30.21  0.1112 6.971 3.4811 17.29    0.0915 7.055 4.2813 15.53    0.1779 14.803 4.6199 30.83
        0.0919 8.559 5.1702 17.07    0.1380 13.771 5.5404 26.71   0.0764 8.549 6.2112 15.96""",
    317.45: """
        0.2241 0.758 0.1878 1.80     0.2242 1.422 0.3571 3.48     0.1946 1.860 0.5306 4.18     0.1676 2.596 0.8598 5.79
        0.1663 4.163 1.3899 8.72     0.2170 6.875 1.7582 14.04    0.1662 5.943 1.9853 11.44    0.1702 7.402 2.4136 13.90
        0.1668 8.321 2.7698 14.89    0.1118 6.974 3.4681 12.10    0.1389 10.881 4.3486 18.04  0.0922 8.617 5.1859 13.88
        0.0776 8.460 6.0520 14.24    0.0771 8.709 6.2666 14.53""",
    332.35: """
        0.2882 0.917 0.1766 0.66     0.2872 2.832 0.5474 2.78     0.2956 4.741 0.8902 5.02     0.2980 6.011 1.1195 6.70
        0.2899 8.721 1.6698 9.57     0.2919 9.170 1.7437 9.98     0.2447 11.762 2.6680 13.08  0.2418 12.306 2.8247 14.57
        0.2234 14.575 3.6209 16.77   0.2036 16.389 4.4675 19.39  0.0929 8.644 5.1633 11.88    0.1279 12.520 5.4323 17.14
        0.0766 8.545 6.1903 11.82""",
}


def dissolution_runs(*temperatures):
    """The table as a laboratory would hand it in: masses and heats."""
    frames = []
    for temperature in temperatures:
        number = 1 + list(RUNS).index(temperature)
        numbers = np.array(RUNS[temperature].split(), float).reshape(-1, 4)
        water, salt, molality, heat = numbers.T
        frames.append(
            pd.DataFrame(
                {
                    "run": [f"T{number}-{i + 1:02d}" for i in range(len(heat))],
                    "salt": "NaCl",
                    "mass / g": (salt * M_NACL / 1000).round(6),
                    "water / g": (water * M_WATER).round(5),
                    "molality / (mol/kg)": molality,
                    "temperature / K": temperature,
                    "heat / J": heat,
                    "u(heat) / J": (STATED * heat).round(4),
                }
            )
        )
    return pd.concat(frames, ignore_index=True)


def settings(temperature):
    return f'[campaign]\ntitle = "NaCl, Hubert et al. 1997"\nreference_temperature = "{temperature} K"\n'


def test_the_table_is_whole():
    table = dissolution_runs(*RUNS)
    assert len(table) == 54
    # typed right: the molality is that of the amounts, but for the one run that contradicts itself and last digits
    by_mass = table["mass / g"] / M_NACL / table["water / g"] * 1000
    off = (by_mass / table["molality / (mol/kg)"] - 1).abs()
    assert table.loc[off > 0.004, "run"].tolist() == ["T2-02"]


def test_at_24_degrees(analysed):
    "3.96 kJ/mol at 297.55 K: 3.88 at 298.15 K (Parker 1965) and -134 J/(K mol) (Pitzer, Peiper & Busey 1984)."
    salts = analysed(dissolution_runs(297.55), settings(297.55)).salts.iloc[0]
    assert salts["standard_enthalpy"] == pytest.approx(3.93, abs=0.05)
    assert salts["interval_low"] < 3.96 < salts["interval_high"]
    assert salts["runs"] == 27
    assert salts["dilution_model"] == "published parameters"


def test_what_straight_lines_would_have_said():
    "4.25 in m and 5.06 in √m, weighted by 1/u², the run above saturation left out: each far outside its own u."
    table = dissolution_runs(297.55).iloc[:26]
    m = table["molality / (mol/kg)"].to_numpy()
    enthalpy = (table["heat / J"] / (table["mass / g"] / M_NACL) / 1000).to_numpy()
    weight = 1 / (STATED * enthalpy)
    assert np.polyfit(m, enthalpy, 1, w=weight)[1] == pytest.approx(4.25, abs=0.01)
    assert np.polyfit(np.sqrt(m), enthalpy, 1, w=weight)[1] == pytest.approx(5.06, abs=0.01)


def test_three_temperatures_together(analysed):
    "3.88 kJ/mol at 298.15 K (Parker 1965)."
    analysis = analysed(dissolution_runs(*RUNS), settings(298.15))
    salt = analysis.salts.iloc[0]
    assert salt["interval_low"] < 3.88 < salt["interval_high"]
    assert salt["runs"] == 54
    told = [remark.text for remark in analysis.campaign.remarks]
    assert [text for text in told if "T2-02" in text and "0.3571" in text and "0.3521" in text]
    assert "heat capacity of dissolution" in set(analysis.budget["source"])


def test_at_44_degrees_without_a_dilute_run(analysed):
    "About 1.45 from 25 °C with -126 J/(K mol); three free terms say 1.88 ± 0.06 with an AICc weight of 1.00."
    salt = analysed(dissolution_runs(317.45), settings(317.45)).salts.iloc[0]
    assert salt["interval_low"] < 1.45 < salt["interval_high"]
    assert salt["interval_high"] - salt["interval_low"] > 4 * 0.06
