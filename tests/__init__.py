"""Tests of the program; each folder mirrors a part of the package."""
