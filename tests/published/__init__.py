"""Figures and answers from elsewhere, each beside its source."""
