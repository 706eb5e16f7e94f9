"""From run results to averages and comparisons: which runs count, and each limit on its own basis."""
