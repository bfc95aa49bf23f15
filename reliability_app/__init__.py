"""Rigpaper: life-data analysis for test rigs and field returns."""

__version__ = "0.1.0"
