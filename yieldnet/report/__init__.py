"""Eighth floor: one view of a result; text, JSON and CSV only lay it out."""
