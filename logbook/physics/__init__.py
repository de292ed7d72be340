"""Pure functions on floats and numpy arrays; stages stand on the last axis."""
