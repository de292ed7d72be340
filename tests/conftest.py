"""Puts this folder on the path, so that every test may write its entries with `workshop`."""
