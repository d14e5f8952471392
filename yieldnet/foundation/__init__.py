"""Ground floor: errors, findings, exact numbers, units, sourced values."""
