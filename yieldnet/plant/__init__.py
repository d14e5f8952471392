"""The feasibility study: from a predicted equation to streams, heat, vessels and cost."""
