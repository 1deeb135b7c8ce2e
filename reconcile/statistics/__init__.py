"""Named error sources, least squares, variance components and tests."""

from reconcile.statistics.collecting import Collector, by_member
from reconcile.statistics.estimates import estimate
from reconcile.statistics.ledger import Ledger, Sources, sources_of_one_line, stack, stated
from reconcile.statistics.linear_fit import Blocks, LinearFit, Response, least_squares

__all__ = [
    "Blocks",
    "Collector",
    "Ledger",
    "LinearFit",
    "Response",
    "Sources",
    "by_member",
    "estimate",
    "least_squares",
    "sources_of_one_line",
    "stack",
    "stated",
]
