"""What a solution means: one module per account, each a pure function of a `Solution`."""
