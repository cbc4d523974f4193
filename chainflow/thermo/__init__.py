"""Matter: components, streams, flash, equilibrium, real gas, heating values, exergy."""
