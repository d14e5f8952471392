"""Second floor: equations, reactions, networks and cases as frozen values, without files."""
