"""Formula texts, the copy for the engine, the engine, and the calls back to the cell functions."""
