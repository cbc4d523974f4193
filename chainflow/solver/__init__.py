"""From a checked flowsheet to its steady state: structure, torn loops, Newton, audit."""
