"""Comparing results: equal terms or not at all, verdicts beyond doubt, targets, regressions, agreement."""
