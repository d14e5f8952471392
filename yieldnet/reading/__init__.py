"""Third floor: files to values with findings; the only code that touches user files."""
