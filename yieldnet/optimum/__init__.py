"""Fourth floor: linear problems, engines and proof; the only code that touches solvers."""
