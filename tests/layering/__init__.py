"""Tests of the house itself: which floor may import which."""
