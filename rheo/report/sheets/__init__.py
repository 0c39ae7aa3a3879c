"""The workbook: numbers as numbers, live formulas with stored results, native charts."""
