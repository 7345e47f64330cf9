"""How sure the figures of a design are: tolerances and model uncertainty, and what its figures hang on."""
