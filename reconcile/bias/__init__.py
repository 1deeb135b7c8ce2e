"""What could be wrong: named hypotheses, their sizes, their significance and their rivals."""

from reconcile.bias.search import search_bias

__all__ = ["search_bias"]
