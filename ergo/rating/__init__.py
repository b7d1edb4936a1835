"""Limits, ratings and the sentences that explain them."""
