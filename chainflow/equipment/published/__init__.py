"""Published parameter sets, one module per source, each with how certain its numbers are."""
