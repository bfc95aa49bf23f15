"""Tests of the session."""
