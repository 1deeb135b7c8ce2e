"""Figures: well-formed, named, free of clashes, and indifferent to the machine's own settings."""

import xml.etree.ElementTree as ElementTree

import matplotlib as mpl
import numpy as np
import pytest

from reconcile.report.figures import MOST_POINTS, draw
from reconcile.report.palette import LIGHT, themed
from reconcile.report.svg import inlined


@pytest.mark.filterwarnings("error")
def test_one_drawing_a_salt_and_one_of_scores(invented):
    drawings = draw(invented)
    assert list(drawings) == ["KCl", "CaCl2_6H2O", "Na2CO3", "scores"]
    for svg in drawings.values():
        ElementTree.fromstring(svg)


def test_heats_of_dilution_have_no_place_in_a_figure(invented, with_dilutions):
    plain, drawings = draw(invented), draw(with_dilutions)
    assert set(drawings) == set(plain)  # none of NaBr, which is only diluted
    assert drawings["CaCl2_6H2O"] == plain["CaCl2_6H2O"]
    with_dilutions.runs = with_dilutions.runs.drop(index=9)  # the heat of dilution of KCl, near 0 kJ/mol
    quantities = with_dilutions.campaign.runs.quantities.values()
    for quantity in quantities:
        quantity.value = np.delete(quantity.value, 9)
    assert drawings["KCl"] == draw(with_dilutions)["KCl"] != plain["KCl"]


def test_without_a_limit_there_is_one_panel_in_which_every_run_is_seen(invented):
    text = " ".join(ElementTree.fromstring(draw(invented)["Na2CO3"]).itertext())
    assert "run − limit" not in text
    assert "−24" in text  # on the axis, about the one run, which is in no fit


def test_an_interval_without_end_does_not_make_the_figure_useless(invented):
    invented.salts.loc[0, ["interval_low", "interval_high", "coverage_factor"]] = -150.0, 185.0, 3158.0
    text = " ".join(ElementTree.fromstring(draw(invented)["KCl"]).itertext())
    assert "100" not in text
    assert "17.2" in text


def test_names_are_drawn_as_they_are(invented):
    svg = draw(invented)["KCl"]
    text = " ".join(ElementTree.fromstring(svg).itertext())
    assert "calorimeter $B_1$" in text
    assert "calorimeter {{7*7}}" in text
    assert "excluded" in text


def test_control_characters_do_not_spoil_the_file(invented):
    invented.runs["calorimeter"] = "A\x01\x1b"
    ElementTree.fromstring(draw(invented)["KCl"])


def test_the_machines_own_settings_do_not_matter(invented):
    plain = draw(invented)
    with mpl.rc_context({"font.size": 30, "axes.facecolor": "red", "lines.linewidth": 9}):
        assert draw(invented) == plain


def test_settings_are_left_as_they_were(invented):
    with mpl.rc_context({"font.size": 30}):
        draw(invented)
        assert mpl.rcParams["font.size"] == 30


def test_many_points_are_thinned(invented):
    one = invented.runs.iloc[[0]]
    invented.runs = one.loc[np.repeat(one.index, 5000)].reset_index(drop=True)
    invented.campaign.runs = type(invented.campaign.runs)(5000)
    assert draw(invented)["KCl"].count("<use") < 3 * MOST_POINTS + 100


def test_two_drawings_share_no_id_once_inlined(invented):
    drawings = draw(invented)
    ids = [
        {e.get("id") for e in ElementTree.fromstring(inlined(svg, f"f-{name}", "x")).iter() if e.get("id")}
        for name, svg in drawings.items()
    ]
    assert sum(map(len, ids)) == len(set().union(*ids))


def test_an_inlined_drawing_brings_no_style_of_its_own(invented):
    whole = inlined(draw(invented)["KCl"], "a", 'KCl "and" <more>')
    assert "<style" not in whole
    assert ElementTree.fromstring(whole).get("aria-label") == 'KCl "and" <more>'


def test_every_colour_follows_the_page():
    for role, colour in LIGHT.items():
        assert themed(f"fill: {colour.upper()}") == f"fill: var(--fig-{role}, {colour})"
    assert themed("fill: #123456") == "fill: #123456"
