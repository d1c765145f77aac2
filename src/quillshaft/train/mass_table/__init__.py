"""A maker's mass-elastic table, CSV or spreadsheet, read into a train file."""
