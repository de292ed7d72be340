"""The engine: entries in, results out. It never imports MkDocs."""
