"""Sixth floor: layers, ladder, coefficients - what a network predicts beside the elements."""
