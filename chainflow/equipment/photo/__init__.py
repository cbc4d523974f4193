"""The parts of a photoelectrochemical device: light paths, curves, junctions, the circuit."""
