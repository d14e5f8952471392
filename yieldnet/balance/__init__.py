"""Fifth floor: over the cell - element matrix, freedom, reconciled point."""
