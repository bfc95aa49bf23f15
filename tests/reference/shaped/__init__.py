"""Computed fits of families with a further parameter, to the units of the sets in the folder above."""
