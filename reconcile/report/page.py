"""index.html: the whole report on one page that needs nothing else."""

from __future__ import annotations

from collections.abc import Iterator
from functools import lru_cache
from importlib.resources import files

from jinja2 import Environment, FunctionLoader, StrictUndefined
from markupsafe import Markup

from reconcile import __version__
from reconcile.report import views
from reconcile.report.cautions import CAUTIONS
from reconcile.report.figures import SCORES
from reconcile.report.markup import formula, list_of_formulae, minus
from reconcile.report.material import Material
from reconcile.report.method import numbers
from reconcile.report.palette import themed
from reconcile.report.results import whole_test
from reconcile.report.rounding import probability, significant
from reconcile.report.scores_figure import MOST_SCORES
from reconcile.report.sections import MOST_FIGURES, MOST_SECTIONS, sections
from reconcile.report.svg import inlined
from reconcile.report.verdict import LEVEL, verdict


def render(material: Material) -> Iterator[tuple[str, bytes]]:
    """The one file index.html."""
    results = material.results
    found = sections(material)
    anchors = {str(salt): section.anchor for salt, section in zip(results.salts["salt"], found, strict=False)}
    few = len(results.salts) <= MOST_FIGURES
    drawn = (
        Markup(themed(inlined(material.drawings[SCORES], "f-scores", "Scores of all salts")))
        if few and SCORES in material.drawings
        else None
    )
    page = (
        environment()
        .get_template("page.html")
        .render(
            campaign=results.campaign,
            version=__version__,
            sentences=verdict(results),
            salts=views.salts(results, anchors),
            suspects=views.suspects(results.bias) if len(results.bias) else None,
            without=views.without_suspects(results.salts, int((results.bias["p_adjusted"] < LEVEL).sum())),
            adjustment=whole_test(results),
            reconciled=views.reconciled(results) if len(results.reconciled) else None,
            references=views.references(results) if len(results.references) else None,
            cycles=views.cycles(results.cycles) if len(results.cycles) else None,
            scores=views.scores(results.comparison) if len(results.comparison) else None,
            scores_drawn=drawn,
            scores_left=max(0, len(results.comparison) - MOST_SCORES),
            sections=found,
            sections_left=max(0, len(results.salts) - MOST_SECTIONS),
            sources=views.sources(results.sources) if len(results.sources) else None,
            assumptions=views.assumptions(results.assumptions) if len(results.assumptions) else None,
            cautions=CAUTIONS,
            method=numbers(),
        )
    )
    yield "index.html", page.encode("utf-8", "replace")


@lru_cache(maxsize=1)
def environment() -> Environment:
    """Templates of the page; everything that is not marked as HTML is escaped."""
    made = Environment(
        autoescape=True,
        undefined=StrictUndefined,
        loader=FunctionLoader(_source),
        trim_blocks=True,
        lstrip_blocks=True,
        keep_trailing_newline=True,
    )
    made.filters.update(
        formula=formula, formulae=list_of_formulae, minus=minus, significant=significant, probability=probability
    )
    made.globals["style"] = Markup(_source("page.css"))
    return made


def _source(name: str) -> str:
    return (files("reconcile.report") / "templates" / name).read_text(encoding="utf-8")
