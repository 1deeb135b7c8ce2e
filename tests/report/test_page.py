"""index.html: whole, inert, and telling what the tables hold."""

import re
from html.parser import HTMLParser
from itertools import pairwise

import pandas as pd
import pytest

from reconcile.report import write_report
from reconcile.report.cautions import CAUTIONS

VOID = {"meta", "link", "br", "img", "input", "hr", "use", "path", "rect", "circle", "line"}


class Tree(HTMLParser):
    """Every element with its attributes, and a check that all are closed in order."""

    def __init__(self):
        super().__init__()
        self.elements, self.open, self.words = [], [], []

    def handle_starttag(self, tag, attrs):
        self.elements.append((tag, dict(attrs)))
        if tag not in VOID:
            self.open.append(tag)

    def handle_startendtag(self, tag, attrs):
        self.elements.append((tag, dict(attrs)))

    def handle_endtag(self, tag):
        if tag not in VOID:
            assert self.open.pop() == tag

    def handle_data(self, data):
        self.words.append(data)


def page_of(invented, tmp_path):
    (path,) = write_report(invented, tmp_path / "report", ["page"])
    return path.read_text(encoding="utf-8")


@pytest.fixture
def page(invented, tmp_path):
    return page_of(invented, tmp_path)


@pytest.fixture
def tree(page):
    found = Tree()
    found.feed(page)
    return found


def test_what_a_laboratory_types_makes_no_element(tree, page):
    assert tree.open == []
    tags = {tag for tag, _ in tree.elements}
    assert not tags & {"script", "b", "iframe", "img", "object", "embed", "form", "base"}
    assert "&lt;script&gt;" in page
    assert "{{7*7}}" in page
    assert "&lt;i&gt;first&lt;/i&gt; of the day" in page
    assert "49" not in {word.strip() for word in tree.words}
    assert not any(name.startswith("on") for _, attributes in tree.elements for name in attributes)


def test_a_hostile_salt_name_is_inert_in_links_and_figures(invented, tmp_path):
    name = '"><img src=x onerror=alert(1)>'
    for table in (
        invented.salts,
        invented.runs,
        invented.curves,
        invented.budget,
        invented.comparison,
        invented.cycles,
    ):
        table["salt"] = table["salt"].replace("KCl", name)
    found = Tree()
    found.feed(page_of(invented, tmp_path))
    assert not [attributes for tag, attributes in found.elements if tag == "img" or "onerror" in attributes]


def test_nothing_outside_is_referred_to(tree):
    for _, attributes in tree.elements:
        for name, value in attributes.items():
            if name in ("href", "src", "xlink:href", "action", "data"):
                assert value.startswith(("#", "data:")), (name, value)
    assert "@import" not in "".join(tree.words)


def test_every_link_leads_somewhere_and_no_id_twice(tree):
    ids = [attributes["id"] for _, attributes in tree.elements if "id" in attributes]
    assert len(ids) == len(set(ids))
    for _, attributes in tree.elements:
        for key in ("href", "xlink:href"):
            if attributes.get(key, "").startswith("#"):
                assert attributes[key][1:] in ids
        for name in attributes.get("aria-labelledby", "").split():
            assert name in ids
    referred = set(re.findall(r"url\(#([^)]+)\)", " ".join(str(a) for _, a in tree.elements)))
    assert referred <= set(ids)


def test_tables_have_captions_and_scopes(tree):
    tags = [tag for tag, _ in tree.elements]
    assert tags.count("caption") == tags.count("table") > 5
    assert all(a.get("scope") in ("col", "row") for tag, a in tree.elements if tag == "th")
    headings = [int(tag[1]) for tag in tags if re.fullmatch("h[1-6]", tag)]
    assert headings[0] == 1
    assert headings.count(1) == 1
    assert all(b - a <= 1 for a, b in pairwise(headings))


def test_values_are_rounded_together_with_their_uncertainty(page):
    assert "17.221(25)" in page
    assert "14.91(30)" in page
    assert "14.02 to 15.80" in page
    assert "−1.23(15)\N{NO-BREAK SPACE}%" in page


def test_the_cautions_are_on_the_page(tree):
    text = re.sub(r"\s+", " ", "".join(tree.words))
    for caution in CAUTIONS:
        assert caution in text


def test_a_salt_without_a_limit_says_why(page):
    assert "No limit at infinite dilution is given." in page
    assert "reacts with water" in page


def test_runs_of_each_kind_are_told_apart(with_dilutions, tmp_path):
    page = page_of(with_dilutions, tmp_path)
    kcl, nabr = (page.split(f'id="h-salt-{name}"')[1].split("</section>")[0] for name in ("KCl", "NaBr"))
    assert "5 dissolutions in water, 1 successive addition and 1 heat of dilution" in kcl
    for shown in ("0.2500 to 0.5000", "successive addition", "1.000 to 0.2500", "heat of dilution", "−0.310(20)"):
        assert f">{shown}<" in kcl
    assert "Heats of dilution stand in the table of runs only." in kcl
    assert "Only heats of dilution are included." in nabr
    assert "Nothing is drawn: no run dissolves this salt." in nabr
    assert ">0.2789<" in nabr
    assert "limiting law" not in nabr
    assert "nan" not in re.sub(r"<svg.*?</svg>", "", page, flags=re.DOTALL).lower().split("<main>")[1]


def test_a_dissolution_alone_needs_no_word_for_its_kind(page):
    assert "successive addition" not in page.split('id="method"')[0]
    assert "heat of dilution" not in page.split('id="method"')[0]


def test_diagnostics_stand_with_the_salt_and_not_in_the_table_of_salts(page):
    kcl = page.split('id="h-salt-KCl"')[1].split("</section>")[0]
    for shown in ("2.05(11) kJ kg", "17.410 and 17.330 kJ/mol", "−160.0(40) J/(K mol)"):
        assert shown in kcl
        assert shown not in page.split('id="each"')[0]


def test_what_to_mind_stands_with_the_salt(invented, tmp_path):
    assert "To mind" not in page_of(invented, tmp_path)
    invented.salts["remarks"] = [("a single run", "KCl <b>"), (), ()]
    assert "<p>To mind: a single run; KCl &lt;b&gt;.</p>" in page_of(invented, tmp_path)


def test_an_empty_campaign_still_makes_a_page(invented, tmp_path):
    for name in ("reconciled", "references", "cycles", "bias", "comparison", "assumptions", "sources"):
        setattr(invented, name, getattr(invented, name).iloc[:0])
    invented.adjustment = {"chi_square": 0.0, "degrees_of_freedom": 0, "p_value": None}
    found = Tree()
    found.feed(page_of(invented, tmp_path))
    assert found.open == []
    assert "There was no published value to compare with." in "".join(found.words)


def test_many_salts_are_shown_without_drawings(invented, tmp_path):
    row = invented.salts.iloc[[0]]
    invented.salts = pd.concat([row.assign(salt=f"K{n}Cl") for n in range(400)], ignore_index=True)
    page = page_of(invented, tmp_path)
    assert page.count("<svg") == 0
    assert "The first 300 salts are shown; the other 100" in page


def test_sources_stand_with_their_status(tree):
    words = [word.strip() for word in tree.words]
    start = words.index("Reference values used")
    row = words[words.index("An invented table", start) :]
    assert [word for word in row if word][:4] == ["An invented table", "1982", "read", "cycles"]
