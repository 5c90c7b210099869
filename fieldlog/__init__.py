"""Field inspection and test log for water-based fire protection systems."""
