"""Estimates of a fit as a ledger: what their errors come from, by name, and how they hang together."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from reconcile.statistics.ledger import Ledger, Sources
from reconcile.statistics.linear_fit import LinearFit

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]

NEGLIGIBLE = 1e-12  # of a variance


def estimate(fit: LinearFit, unknowns: Integers) -> Ledger:
    """The chosen unknowns as a ledger with the exact covariance of the estimate, in three parts.

    - each block's own A⁻¹: private errors of its observations by budget line, and its narrow sources;
    - A⁻¹B S⁻¹: the wide sources, under their own names;
    - A⁻¹B (S⁻¹ − S⁻²)^½: what the adjustment of the wide sources carries over from all observations (`adjusted`).

    Parameters
    ----------
    fit : LinearFit
        With blocks.
    unknowns : int array (s,)

    Returns
    -------
    Ledger (s,)

    Raises
    ------
    ValueError
        If the fit has no blocks.
    """
    if fit.blocks is None:
        raise ValueError("an estimate with named sources needs blocks")
    named, adjusted = fit.wide_loadings(unknowns)
    count = adjusted.shape[1]
    directions = Sources(
        tuple(f"adjustment of shared sources, direction {i + 1}" for i in range(count)),
        ("adjusted",) * count,
        ("all runs, through what they share",) * count,
    )
    ledger = _own_errors(fit, unknowns).with_sources(sparse.csr_array(named), fit.observations.sources.take(fit.wide))
    return ledger.with_sources(sparse.csr_array(adjusted), directions)


def _own_errors(fit: LinearFit, unknowns: Integers) -> Ledger:
    """Ledger of the chosen unknowns from A⁻¹ alone, the wide sources held.

    A block with one chosen unknown keeps all of it private, by budget line. Where a block has several (an anhydrous
    salt and
    its hydrates), its narrow sources and, line by line, the errors of its observations are shared among them.
    """
    assert fit.blocks is not None
    block = fit.blocks.of_unknown[unknowns]
    several = np.isin(block, np.flatnonzero(np.bincount(block) > 1)) if len(block) else np.zeros(0, bool)
    place = np.full(fit.unknowns, -1)
    place[unknowns] = np.arange(len(unknowns))

    names = fit.observations.sources.take(fit.narrow)
    lines = tuple(dict.fromkeys(fit.observations.lines + names.budget_line))
    line_of_source = np.array([lines.index(b) for b in names.budget_line], dtype=np.int64)
    private_square = np.zeros((len(unknowns), len(lines)))
    rows, columns, values = [], [], []
    gains: list[tuple[Integers, Floats]] = []
    for chosen, solved in fit.coloured(unknowns):
        entry_of_block = np.full(int(fit.block_of_column.max()) + 1, -1)
        entry_of_block[fit.block_of_column[chosen]] = place[chosen]
        # errors of the block's own observations
        gain = fit.weight * (fit.inner @ solved)
        entry = entry_of_block[fit.blocks.of_row]
        mine = entry >= 0
        for column, line in enumerate(fit.observations.lines):
            size = (gain * fit.observations.private[:, column])[mine] ** 2
            private_square[:, lines.index(line)] += np.bincount(entry[mine], size, minlength=len(unknowns))
        # its narrow sources
        entry = entry_of_block[fit.block_of_column[fit.unknowns :]]
        touching = np.flatnonzero(entry >= 0)
        load = -solved[fit.unknowns :][touching]
        alone = ~several[entry[touching]]
        at = (entry[touching][alone], line_of_source[touching][alone])
        np.add.at(private_square, at, load[alone] ** 2)
        rows.append(entry[touching][~alone])
        columns.append(touching[~alone])
        values.append(load[~alone])
        gains.append((entry_of_block, gain))

    narrow_used, narrow_column = np.unique(np.concatenate(columns or [np.zeros(0, int)]), return_inverse=True)
    loading = sparse.csr_array(
        (np.concatenate(values or [np.zeros(0)]), (np.concatenate(rows or [np.zeros(0, int)]), narrow_column)),
        shape=(len(unknowns), len(narrow_used)),
    )
    private = np.sqrt(private_square)
    ledger = Ledger(fit.value[unknowns], private, lines, loading, names.take(narrow_used))
    return _share_lines(fit, ledger, gains, several, block) if several.any() else ledger


def _share_lines(
    fit: LinearFit, ledger: Ledger, gains: list[tuple[Integers, Floats]], several: NDArray[np.bool_], block: Integers
) -> Ledger:
    """Turn the private lines of blocks with several chosen unknowns into sources that these share."""
    assert fit.blocks is not None
    private = ledger.private.copy()
    private[several] = 0.0
    order = np.argsort(fit.blocks.of_row, kind="stable")
    edges = np.searchsorted(fit.blocks.of_row[order], np.arange(int(block.max()) + 2))
    rows, columns, values = [], [], []
    names: list[str] = []
    lines: list[str] = []
    for b in np.unique(block[several]).tolist():  # electrolytes with hydrates: few
        mine = order[edges[b] : edges[b + 1]]
        entries = np.flatnonzero(block == b)
        gain = np.array(
            [g[mine] for e in entries for table, g in gains if table[b] == e]
        )  # (crystals, own observations)
        for column, line in enumerate(fit.observations.lines):
            root = gain * fit.observations.private[mine, column]
            size, direction = np.linalg.eigh(root @ root.T)
            if not size[-1] > 0:
                continue
            alone = max(float(size[0]), 0.0)  # what each crystal has to itself, the same for all
            private[entries, ledger.lines.index(line)] = np.sqrt(alone)
            for k in np.flatnonzero(size - alone > NEGLIGIBLE * size[-1]):
                rows.append(entries)
                columns.append(np.full(len(entries), len(names)))
                values.append(direction[:, k] * np.sqrt(size[k] - alone))
                names.append(f"{line}, solution {b}, direction {k + 1}")
                lines.append(line)
    loading = sparse.csr_array(
        (np.concatenate(values), (np.concatenate(rows), np.concatenate(columns))), shape=(len(ledger), len(names))
    )
    base = Ledger(ledger.value, private, ledger.lines, ledger.loading, ledger.sources)
    return base.with_sources(loading, Sources(tuple(names), ("adjusted",) * len(names), tuple(lines)))
