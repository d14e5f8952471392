"""First floor: atomic weights, formulas, compound and biomass library."""
