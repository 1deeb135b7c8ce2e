"""The whole job: from a checked campaign to everything that a report prints."""

from __future__ import annotations

from reconcile import reference
from reconcile.bias import search_bias
from reconcile.calorimetry import reduce_runs
from reconcile.campaign import Campaign
from reconcile.chemistry import water
from reconcile.comparison import Analysis, compare
from reconcile.cycles import adjust, network, with_own_formation_enthalpies, with_own_solution_enthalpies
from reconcile.dilution import at_the_tables_temperature, dilute, heat_capacity_change, published_sets


def analyse(campaign: Campaign) -> Analysis:
    """Reduce, extrapolate, adjust, search for bias, compare: one way through.

    Parameters
    ----------
    campaign : Campaign
        As `read_campaign` returns it.

    Returns
    -------
    Analysis
        With tidy pandas tables under the names of results.json.
    """
    # runs: what each calorimeter says, kJ/mol at the run's own temperature and molality
    runs = reduce_runs(campaign)

    # dilution: all salts to infinite dilution, their parameters leaning on what is published
    parameters = reference.dilution_parameters()
    sets = published_sets(parameters, float(water.debye_hueckel_slope(298.15)))
    heat_capacities = reference.heat_capacity_changes(campaign.salts)
    dilution = dilute(campaign, runs, sets, heat_capacity_change(campaign.salts, heat_capacities))
    salts = [campaign.salts[i] for i in dilution.layout.crystal]
    formulas = tuple(salt.formula for salt in salts)
    limits = dilution.extrapolation

    # cycles: all salts and the reference values in one adjustment
    published = with_own_solution_enthalpies(reference.solution_enthalpies(formulas), campaign.references)
    formation = reference.formation_enthalpies(campaign.formation_set)
    change = dilution.heat_capacity.take(dilution.layout.crystal)
    measured = at_the_tables_temperature(limits.crystals, salts, change, campaign.reference_temperature)
    net = network(salts, measured, with_own_formation_enthalpies(formation, campaign.references), published)
    adjusted = adjust(formulas, net)

    # bias: what could be wrong, asked of runs and cycles together
    suspicions = search_bias(campaign, runs, dilution, adjusted)

    # comparison: scores against published values
    expanded = limits.half_width * measured.u / limits.crystals.u
    scores = compare(formulas, measured.value, measured.u, expanded, published, net.circular)
    saturation = reference.solubility(formulas)["molality"].to_numpy(float)
    return Analysis(
        campaign, runs, dilution, adjusted, suspicions, scores, published, parameters, heat_capacities, saturation
    )
