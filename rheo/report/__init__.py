"""Figures, the design note (HTML and PDF) and the workbook."""
