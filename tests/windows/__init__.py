"""Tests of the windows, driven as a person would: keys, mouse, clipboard."""
