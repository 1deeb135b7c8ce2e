"""What could be wrong: named hypotheses, their sizes, their significance and their rivals."""

from reconcile.bias.search import Suspicions, search_bias

__all__ = ["Suspicions", "search_bias"]
