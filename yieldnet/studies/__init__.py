"""Seventh floor: studies - maps over changed cases: knock-outs, additions, trade-offs."""
