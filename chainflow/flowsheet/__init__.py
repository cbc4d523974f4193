"""From a file to a checked network: reading with places, addresses, checks."""
