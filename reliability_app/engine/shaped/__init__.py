"""Families with a further parameter, a shape or a threshold, each as a sheaf of problems in (a, b)."""
