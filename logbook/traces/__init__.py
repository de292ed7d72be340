"""Trace files from instruments: CSV and Touchstone."""
