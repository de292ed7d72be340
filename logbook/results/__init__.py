"""A book as data: `results.json`, the same bytes from the site and from the command line."""

from logbook.results.data import SCHEMA, results_data
from logbook.results.encode import results_json, schema_text

__all__ = ["SCHEMA", "results_data", "results_json", "schema_text"]
