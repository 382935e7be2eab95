"""Figures: charts and drawings as data, and the two ways they are drawn."""
