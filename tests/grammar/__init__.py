"""Readers of netlists, of values and of texts."""
