"""Benchmarks, as ratios to something measured in the same run. Run with -s to see them."""
