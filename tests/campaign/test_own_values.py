"""[[reference]]: values of the laboratory's own are read, converted and told; each fault alone and all at once."""

from pathlib import Path

import pytest

from reconcile.campaign import Campaign, CampaignError, LabReference, Problem, read_campaign

RUNS = """run,salt,molality / (mol/kg),enthalpy / (kJ/mol)
R1,KBr,0.1,19.9
R2,CaCl2·6H2O,0.1,15.9
"""
GOOD = {
    "quantity": "enthalpy of solution", "species": "KBr", "value": "19.8 kJ/mol", "u": "0.1 kJ/mol", "source": "card 7",
}  # fmt: skip


def entry(without: str = "", **keys: object) -> str:
    """One [[reference]], from a good one with some keys changed or one left out."""
    lines = {name: value for name, value in {**GOOD, **keys}.items() if name != without}
    return "[[reference]]\n" + "".join(
        f"{name} = {value if not isinstance(value, str) else repr(value)}\n" for name, value in lines.items()
    )


def campaign_with(folder: Path, text: str) -> Campaign:
    (folder / "runs.csv").write_text(RUNS, encoding="utf-8")
    (folder / "campaign.toml").write_text(text, encoding="utf-8")
    return read_campaign(folder)


def faults(folder: Path, text: str) -> tuple[Problem, ...]:
    with pytest.raises(CampaignError) as told:
        campaign_with(folder, text)
    return told.value.problems


def test_none_is_none(tmp_path: Path) -> None:
    assert campaign_with(tmp_path, "[campaign]\ntitle = 'x'\n").references == ()


def test_each_kind_in_the_glossarys_unit(tmp_path: Path) -> None:
    text = "".join(
        [
            entry(value="4750 cal/mol", u="0.5 %"),
            entry(species="CaCl2.6H2O", by="A. B.", date="2026-05-31"),
            entry(quantity="formation enthalpy", species="K Br", value="-393.8 kJ/mol", u="50 J/mol"),
            entry(quantity="formation enthalpy", species="Ca²⁺", value="-543000 J/mol"),
            entry(quantity="formation enthalpy", species="SO4^2-", value="-909.3 kJ/mol"),
            entry(quantity="formation enthalpy", species="H2O", value="-285.8 kJ/mol"),
            entry(species="NaCl", value="0 kJ/mol"),
        ]
    )
    found = campaign_with(tmp_path, text).references
    assert [(one.quantity, one.species, one.phase) for one in found] == [
        ("enthalpy of solution", "KBr", "cr"),
        ("enthalpy of solution", "CaCl2·6H2O", "cr"),
        ("formation enthalpy", "KBr", "cr"),
        ("formation enthalpy", "Ca+2", "aq"),
        ("formation enthalpy", "SO4-2", "aq"),
        ("formation enthalpy", "H2O", "l"),
        ("enthalpy of solution", "NaCl", "cr"),
    ]
    assert [one.value for one in found] == pytest.approx(
        [4.750 * 4.184, 19.8, -393.8, -543.0, -909.3, -285.8, 0.0]  # 4.184 J a calorie, by definition
    )
    assert [one.u for one in found] == pytest.approx([4.750 * 4.184 * 0.005, 0.1, 0.05, 0.1, 0.1, 0.1, 0.1])
    assert [one.source for one in found[:2]] == ["card 7", "card 7 (A. B., 2026-05-31)"]


def test_each_is_told_with_what_it_replaces(tmp_path: Path) -> None:
    text = (
        entry(value="18.97 kJ/mol")
        + entry(species="KI")
        + entry(quantity="formation enthalpy", species="Br-", value="-121 kJ/mol")
        + entry(quantity="formation enthalpy", species="H2O", value="-286 kJ/mol")
    )
    campaign = campaign_with(tmp_path, text)
    own = [remark for remark in campaign.remarks if "the laboratory's own value" in remark.text]
    assert len(own) == len(campaign.references) == 4
    assert "18.97 kJ/mol with u = 0.1 kJ/mol (card 7)" in own[0].text
    assert "in place of the tabulated one, 19.87 kJ/mol" in own[0].text  # Parker 1965, from memory
    assert "mixing sets" in own[0].text
    assert own[0].affects == own[2].affects == "salt KBr"
    assert "enthalpy of solution of KI serves nothing" in own[1].text
    assert "formation enthalpy of Br-(aq)" in own[2].text
    assert "tabulated one, -285.83 kJ/mol" in own[3].text  # CODATA 1989, from memory
    assert own[3].affects == "salt CaCl2·6H2O"


def test_where_nothing_is_tabulated_the_remark_says_so(tmp_path: Path) -> None:
    (tmp_path / "runs.csv").write_text(RUNS.replace("KBr", "Pr(ReO4)3"), encoding="utf-8")
    (tmp_path / "campaign.toml").write_text(entry(species="Pr(ReO4)3"), encoding="utf-8")
    (own,) = [remark for remark in read_campaign(tmp_path).remarks if "own value" in remark.text]
    assert "no tabulated one is held" in own.text
    assert "in place of" not in own.text


ONE_FAULT = {
    "no quantity": (entry("quantity"), "reference 1: KBr has no quantity"),
    "no species": (entry("species"), "reference 1: there is no species. Expected a formula or an ion"),
    "no value": (entry("value"), 'KBr has no value. Expected a number with its unit. Add value = "… kJ/mol".'),
    "no u": (entry("u"), 'KBr has no u. Expected the standard uncertainty of the value, with its unit. Add u'),
    "no source": (entry("source"), "reference 1: KBr has no source"),
    "blank source": (entry(source=" "), "KBr has no source"),
    "unknown key": (entry(sauce="x"), 'reference 1, sauce: "sauce" is unknown'),
    "near key": (entry("source", sorce="x") + "source = 'x'\n", "Did you mean source?"),
    "expanded": (entry(U="0.2 kJ/mol"), "Write u, the standard uncertainty: U divided by its k."),
    "later quantity": (entry(quantity="lattice enthalpy"), '"lattice enthalpy" is in the design of the input but'),
    "quantity in capitals": (entry(quantity="Enthalpy of solution"), 'Did you mean "enthalpy of solution"?'),
    "other quantity": (entry(quantity="colour"), 'reference 1, quantity: "colour" is unknown. Expected "enthalpy'),
    "value as number": (entry(value=19.8), 'reference 1, value: 19.8. Expected a number with its unit, between'),
    "value without unit": (entry(value="19.8"), 'reference 1, value: "19.8": it has no unit'),
    "value of another kind": (entry(value="19.8 kJ"), "a unit of energy"),
    "value in percent": (entry(value="19.8 %"), "has no dimension"),
    "decimal comma": (entry(value="19,8 kJ/mol"), 'Write "19.8 kJ/mol".'),
    "no number": (entry(value="about 20 kJ/mol"), "a number with a decimal point"),
    "infinite value": (entry(value="1e999 kJ/mol"), "a finite number"),
    "infinite u": (entry(u="1e999 kJ/mol"), "a standard uncertainty of more than 0"),
    "u of zero": (entry(u="0 kJ/mol"), 'reference 1, u: "0 kJ/mol". Expected a standard uncertainty of more than 0'),
    "negative u": (entry(u="-0.1 kJ/mol"), "a standard uncertainty of more than 0"),
    "percent of zero": (entry(value="0 kJ/mol", u="1 %"), "a standard uncertainty of more than 0"),
    "u without unit": (entry(u="0.1"), 'reference 1, u: "0.1": it has no unit'),
    "unbalanced": (entry(species="KBr2"), 'reference 1, species: "KBr2". Expected ions whose charges balance'),
    "small letters": (entry(species="kbr"), "Did you mean KBr?"),
    "letter too many": (entry(species="KBrr"), "Did you mean KBr?"),
    "ion dissolving": (entry(species="K+"), "a neutral salt, not an ion"),
    "water dissolving": (entry(species="H2O"), "Water alone does not dissolve"),
    "ion without charge": (entry(quantity="formation enthalpy", species="Na"), "Did you mean Na+?"),
    "unknown ion": (entry(quantity="formation enthalpy", species="SO4-3"), "Did you mean SO4-2?"),
    "ion of two charges": (entry(quantity="formation enthalpy", species="Fe"), "Did you mean Fe+2 or Fe+3?"),
    "two readings": (entry(quantity="formation enthalpy", species="Ca2+"), "Write Ca+2 or Ca^2+."),
    "proton": (entry(quantity="formation enthalpy", species="H+"), "zero by convention"),
    "bad species of a bad quantity": (entry(quantity="lattice enthalpy", species="K+"), "not yet served"),
    "twice": (entry() + entry(species=" K Br"), "reference 2: the enthalpy of solution of KBr stands in reference 1"),
    "twice in two spellings": (entry() + entry(species="BrK"), "the enthalpy of solution of BrK stands in reference 1"),
    "ion twice": (
        entry(quantity="formation enthalpy", species="Ca+2") + entry(quantity="formation enthalpy", species="Ca²⁺"),
        "reference 2: the formation enthalpy of Ca+2 stands in reference 1 already",
    ),
    "date": (entry(date="May"), "reference 1, date"),
    "one table": (entry().replace("[[reference]]", "[reference]"), "a table [[reference]] for each"),
    "a list of texts": ("reference = ['KBr']", "a table [[reference]] for each"),
}  # fmt: skip


@pytest.mark.parametrize(("text", "words"), ONE_FAULT.values(), ids=ONE_FAULT)
def test_one_fault(tmp_path: Path, text: str, words: str) -> None:
    (problem,) = faults(tmp_path, text)
    assert str(problem).startswith("campaign.toml, reference")
    assert words in str(problem)
    assert problem.remedy


def test_the_same_species_of_two_quantities_is_no_repetition(tmp_path: Path) -> None:
    text = entry() + entry(quantity="formation enthalpy", value="-393.8 kJ/mol")
    assert len(campaign_with(tmp_path, text).references) == 2


def test_all_faults_at_once_in_the_order_of_the_file(tmp_path: Path) -> None:
    text = (
        entry("source", species="KBr2", value="19,8 kJ/mol", u="0 kJ/mol")
        + "[campaign]\nname = 'x'\n"
        + entry(quantity="colour")
        + entry()
        + entry()
        + entry(value="20", colour="red")
        + "[[exclude]]\nrun = 'R1'\n"
    )
    told = [(problem.column, problem.code) for problem in faults(tmp_path, text)]
    assert told == [
        ("reference 1, species", "formula"),
        ("reference 1, value", "decimal comma"),
        ("reference 1, u", "uncertainty"),
        ("reference 1", "missing"),
        ("reference 2, quantity", "unknown quantity"),
        ("reference 4", "twice"),
        ("reference 5", "twice"),
        ("reference 5, value", "unit"),
        ("reference 5, colour", "unknown key"),
        ("[campaign] name", "unknown key"),
        ("exclude 1", "missing"),
    ]


def test_a_reference_is_frozen() -> None:
    one = LabReference("enthalpy of solution", "KBr", "cr", 19.8, 0.1, "card 7")
    with pytest.raises(AttributeError):
        one.value = 20.0  # type: ignore[misc]
