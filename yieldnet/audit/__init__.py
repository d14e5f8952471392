"""Fifth floor: one function a rule over a network."""
