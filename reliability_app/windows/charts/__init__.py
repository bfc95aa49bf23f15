"""The chart pages: probability paper, hazard and survival."""
