"""Tests of the Units grid."""
