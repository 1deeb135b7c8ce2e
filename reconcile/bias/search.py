"""Every hypothesis tested with the runs and the cycles together: size, interval, significance, rivals, power."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pandas as pd
from numpy.typing import NDArray
from scipy import sparse
from scipy.special import ndtri, stdtrit

from reconcile.bias.evidence import Evidence, correlation, evidence, partial, units, without
from reconcile.bias.hypotheses import CATALOGUE, LINEAR, Hypothesis
from reconcile.bias.largest import adjusted_p
from reconcile.calorimetry import ReducedRuns
from reconcile.campaign import Campaign
from reconcile.cycles import Adjustment
from reconcile.dilution import Dilution
from reconcile.dilution.screen import tail

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]

LEVEL = 0.05  # of the adjusted p
POWER = 0.8
SAME = 0.99  # correlation above which two hypotheses are one direction
ALIKE = 0.9  # and above which they are named as rivals
APART = 0.05  # and below which they may be accepted in one step
OWN = 1e-3  # share of its information that a hypothesis must have to itself to be accepted beside others
CANDIDATES = 12  # single runs looked at with the cycles as well
MANY = 1e4  # degrees of freedom told as infinite
MOST = 20  # steps of the joint account


@dataclass(frozen=True, slots=True, eq=False)
class _Asked:
    """A hypothesis of one subject."""

    name: str
    subject: str
    unit: str
    within: str  # what makes it testable inside the runs
    kind: Hypothesis | None = None


@dataclass(frozen=True, slots=True, eq=False)
class _Stage:
    """All hypotheses at one stage of the account: catalogue, references, then the worst single runs."""

    asked: list[_Asked]
    found: Evidence
    z: Floats  # given what is accepted
    u: Floats  # linear, NaN where nothing can be told
    p_value: Floats
    p_adjusted: Floats
    given: list[int]  # what is accepted
    runs: Integers  # rows of the single runs at the end of `asked`


@dataclass(frozen=True, slots=True, eq=False)
class Suspicions:
    """What could be wrong, and what would become of the salts."""

    hypotheses: pd.DataFrame
    change: Floats  # (C,) kJ/mol, of the standard enthalpies if what is significant were taken out
    variance_of_change: Floats  # (C,)


def search_bias(campaign: Campaign, runs: ReducedRuns, dilution: Dilution, adjustment: Adjustment) -> Suspicions:
    """Test the catalogue, each run and each reference value; most significant first.

    The most significant is accepted into a joint account as long as its adjusted p is below 0.05; all sizes and
    tests are then given the others accepted. Nothing is taken out of the table of salts.

    Returns
    -------
    Suspicions. Their table: hypothesis, subject, size, u, unit, interval_low, interval_high, degrees_of_freedom,
    statistic, p_value, p_adjusted, delta_chi_square, smallest_detectable, rests_on, confounded_with (design, 6). Of
    single runs and reference values: those with adjusted p < 0.05 and the worst one.
    """
    columns, asked = _catalogue(campaign, runs, dilution)
    accepted: list[int] = []  # positions in the catalogue and among the references
    spoilt: list[int] = []  # rows of the runs' fit
    stage = _stage(campaign, dilution, adjustment, columns, asked, accepted, spoilt)
    for _ in range(MOST):
        found = _next(stage, len(spoilt))
        if not found:
            break
        fixed = len(stage.asked) - len(stage.runs)
        accepted += [i for i in found if i < fixed]
        spoilt += [int(stage.runs[i - fixed]) for i in found if i >= fixed]
        stage = _stage(campaign, dilution, adjustment, columns, asked, accepted, spoilt)
    table = _table(stage, dilution.extrapolation.freedom, len(dilution.layout.row))
    return Suspicions(table, *without(stage.found, stage.given))


def _next(stage: _Stage, spoilt: int) -> list[int]:
    """The most significant hypothesis not yet accepted, and with it others that have next to nothing to do with it."""
    fixed = len(stage.asked) - len(stage.runs)
    free = ~_doubled(stage) & (stage.p_adjusted < LEVEL)
    free[stage.given] = False
    free[fixed : fixed + spoilt] = False
    order = np.argsort(-np.where(free, np.abs(stage.z), 0.0), kind="stable")[: int(free.sum())]
    likeness = np.abs(correlation(stage.found))
    chosen: list[int] = []
    for i in order.tolist():
        apart = not chosen or likeness[i, chosen].max() < APART
        if apart and _own_direction(stage.found.information, i, stage.given + chosen):
            chosen.append(i)
    return chosen


def _own_direction(information: Floats, i: int, given: list[int]) -> bool:
    """Whether enough is left of a hypothesis beside others together: pair by pair they may look unlike and are not."""
    cross = information[given, i]
    left = information[i, i] - cross @ np.linalg.solve(information[np.ix_(given, given)], cross)
    return bool(left > OWN * information[i, i])


def _catalogue(campaign: Campaign, runs: ReducedRuns, dilution: Dilution) -> tuple[sparse.csr_array, list[_Asked]]:
    """Loadings of all subjects that touch an included run, on the observations of the runs' fit."""
    parts, asked = [sparse.csr_array((len(campaign.runs), 0))], []
    for kind in CATALOGUE:
        loading = sparse.csr_array(
            sparse.diags_array(dilution.layout.included.astype(float)) @ kind.loadings(campaign, runs)
        )
        touched = np.flatnonzero(np.asarray(abs(loading).sum(axis=0)).ravel() > 0)
        parts.append(sparse.csr_array(loading[:, touched]))
        subjects = kind.subjects(campaign)
        asked += [_Asked(kind.name, subjects[i], kind.unit, kind.within, kind) for i in touched.tolist()]
    return dilution.loadings(sparse.csr_array(sparse.hstack(parts, format="csr"))), asked


def _stage(
    campaign: Campaign, dilution: Dilution, adjustment: Adjustment, columns: sparse.csr_array, asked: list[_Asked],
    accepted: list[int], spoilt: list[int],
) -> _Stage:  # fmt: skip
    """All tests, given what is accepted so far."""
    fit = dilution.extrapolation.fit
    salts = len(adjustment.reconciled)
    references = np.arange(salts, len(adjustment.fit.weight))
    quantity, species = adjustment.references["quantity"].tolist(), adjustment.references["species"].tolist()
    asked = asked + [
        _Asked("reference", f"{s}, {q}", "kJ/mol", "cycles") for s, q in zip(species, quantity, strict=True)
    ]
    worst, visible = _worst_runs(dilution, columns, asked, adjustment, accepted, spoilt)
    labels = campaign.runs.keys["run"]
    names = [labels.labels[labels.code[dilution.layout.row[r]]] for r in worst.tolist()]
    fixed = len(asked)
    asked = asked + [_Asked("run", name, "kJ/mol", "molality") for name in names]

    empty = sparse.csr_array((len(fit.weight), len(references)))
    on_runs = sparse.csr_array(sparse.hstack([columns, empty, units(worst, len(fit.weight))], format="csr"))
    before = sparse.csr_array((len(adjustment.fit.weight), columns.shape[1]))
    after = sparse.csr_array((len(adjustment.fit.weight), len(worst)))
    on_references = sparse.csr_array(
        sparse.hstack([before, units(references, len(adjustment.fit.weight)), after], format="csr")
    )
    found = evidence(dilution, adjustment, on_runs, on_references)

    given = accepted + list(range(fixed, fixed + len(spoilt)))
    score, information = partial(found, given)
    seen = found.testable & (information > 1e-6 * np.diag(found.information))
    root = np.sqrt(np.where(seen, information, 1.0))
    z = np.where(seen, score / root, 0.0)
    p = np.where(seen, tail(z, dilution.extrapolation.freedom, found.within), 1.0)
    one_sided = np.array([a.kind is not None and a.kind.never_negative for a in asked], dtype=bool)
    p = np.where(one_sided, np.where(z > 0, p / 2, 1 - p / 2), p)
    as_normal = np.where(p < 1, np.abs(ndtri(np.maximum(p, 1e-300) / 2)), 0.0)  # Student's tails as the normal's
    adjusted = np.empty(len(asked))
    adjusted[:fixed] = adjusted_p(p[:fixed], as_normal[:fixed], correlation(found)[:fixed, :fixed], visible)
    adjusted[fixed:] = np.minimum(-np.expm1((visible + fixed) * np.log1p(-np.minimum(p[fixed:], 1 - 1e-16))), 1.0)
    return _Stage(asked, found, z, np.where(seen, 1 / root, np.nan), p, adjusted, given, worst)


def _worst_runs(
    dilution: Dilution, columns: sparse.csr_array, asked: list[_Asked], adjustment: Adjustment, accepted: list[int],
    spoilt: list[int],
) -> tuple[Integers, int]:  # fmt: skip
    """The spoilt runs accepted, then the worst of the others given what is accepted; and how many can be told."""
    fit = dilution.extrapolation.fit
    n = len(dilution.layout.row)
    score, information = (part[:n].copy() for part in fit.single_observations())
    visible = information > 1e-6 * fit.weight[:n]
    on_runs = [a for a in accepted if a < columns.shape[1]]
    taken = sparse.csr_array(
        sparse.hstack([columns[:, on_runs], units(np.array(spoilt, dtype=int), len(fit.weight))], format="csr")
    )
    if taken.shape[1]:
        none = sparse.csr_array((len(adjustment.fit.weight), taken.shape[1]))
        together = evidence(dilution, adjustment, taken, none)
        inverse = np.linalg.inv(together.information)
        cross = fit.unexplained(taken)[:n]
        score -= cross @ (inverse @ together.score)
        information = information - np.einsum("ni,ij,nj->n", cross, inverse, cross)
    able = visible & (information > 1e-6 * fit.weight[:n])
    z = np.where(able, np.abs(score) / np.sqrt(np.where(able, information, 1.0)), 0.0)
    z[spoilt] = 0.0
    order = np.argsort(-z, kind="stable")[:CANDIDATES]
    return np.concatenate([np.array(spoilt, dtype=np.int64), order[~np.isin(order, spoilt)]]), int(visible.sum())


def _doubled(stage: _Stage) -> NDArray[np.bool_]:
    """True for a hypothesis of the same direction as another of the catalogue.

    Of two kinds the later one of the catalogue; of two subjects of one kind the less significant: two calorimeters
    that only differ from each other, where the references say which. A size that cannot be loses to one that can.
    """
    out = np.zeros(len(stage.asked), bool)
    able = np.array([a.kind is not None for a in stage.asked], dtype=bool) & stage.found.testable
    alike = np.triu(np.abs(correlation(stage.found)) > SAME, 1) & np.outer(able, able)
    for i, j in zip(*np.nonzero(alike), strict=True):
        first, second = stage.asked[i], stage.asked[j]
        loser = j if first.name != second.name or stage.p_value[i] <= stage.p_value[j] else i
        out[int(loser)] = True
    return out


def _table(stage: _Stage, freedom: float, runs: int) -> pd.DataFrame:
    linear = stage.z * np.nan_to_num(stage.u)
    size, u = linear.copy(), stage.u.copy()
    for i, a in enumerate(stage.asked):
        to_size, slope = (a.kind.size, a.kind.size_slope) if a.kind is not None else LINEAR
        size[i], u[i] = float(to_size(linear[i : i + 1])[0]), float(stage.u[i] * slope(linear[i : i + 1])[0])
    told = np.isfinite(u)
    own = freedom / np.maximum(stage.found.within, 1e-3) ** 2  # of each size: what references say has a stated scale
    factor = np.where(np.isfinite(own), stdtrit(np.clip(own - 1, 1.0, 1e9), 0.975), ndtri(0.975))
    count = len(stage.asked) - len(stage.runs) + runs
    critical = float(-ndtri(LEVEL / (2 * max(count, 1)))) + float(ndtri(POWER))

    def or_missing(values: Floats) -> Floats:
        return np.where(told, values, np.nan)

    frame = pd.DataFrame(
        {
            "hypothesis": [a.name for a in stage.asked],
            "subject": [a.subject for a in stage.asked],
            "size": or_missing(size),
            "u": u,
            "unit": [a.unit for a in stage.asked],
            "interval_low": or_missing(size - factor * u),
            "interval_high": or_missing(size + factor * u),
            "degrees_of_freedom": np.where(own < MANY, own, np.inf),
            "statistic": or_missing(stage.z),
            "p_value": or_missing(stage.p_value),
            "p_adjusted": or_missing(stage.p_adjusted),
            "delta_chi_square": or_missing(stage.z**2),
            "smallest_detectable": critical * u,
            "rests_on": [_rests_on(a, w, t) for a, w, t in zip(stage.asked, stage.found.within, told, strict=True)],
            "confounded_with": _rivals(stage),
        }
    )
    frame = frame[~_doubled(stage)]
    frame = frame.sort_values(
        ["p_value", "delta_chi_square"], ascending=[True, False], kind="stable", na_position="last"
    )
    few = frame["hypothesis"].isin(["run", "reference"])
    worst = few & ~frame["hypothesis"].where(few).duplicated()
    return frame[~few | (frame["p_adjusted"] < LEVEL) | worst].reset_index(drop=True)


def _rests_on(asked: _Asked, within: float, told: bool) -> tuple[str, ...]:
    inside = (asked.within,) if within > 0.05 else ()
    outside = ("cycles" if asked.name == "reference" else "references",) if within < 0.95 else ()
    return inside + outside if told else ()


def _rivals(stage: _Stage) -> list[tuple[str, ...]]:
    """What each hypothesis cannot well be told from; a rival that would need a size that cannot be is none."""
    likeness = correlation(stage.found)
    close = np.abs(likeness) > ALIKE
    np.fill_diagonal(close, False)
    one_sided = np.array([a.kind is not None and a.kind.never_negative for a in stage.asked], dtype=bool)
    close &= ~(one_sided[None, :] & (likeness * np.sign(stage.z)[:, None] < 0))
    label = [f"{a.name} {a.subject}" for a in stage.asked]
    fixed = len(label) - len(stage.runs)
    return [tuple(label[j] for j in np.flatnonzero(row[:fixed]).tolist()) for row in close]
