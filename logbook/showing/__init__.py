"""Findings and predictions as pieces: what blocks and pages have in common to show."""
