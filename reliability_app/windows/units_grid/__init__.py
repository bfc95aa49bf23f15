"""The units grid: a spreadsheet over the unit table."""
