"""The ground everything stands on: quantities with units, faults with places, names, constants."""
