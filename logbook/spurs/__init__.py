"""Spurs: which products of a chain's sources land where they are heard, what speaks against each, how to avoid them."""
