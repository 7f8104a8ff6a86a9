"""The calculation itself: symbols, formulas, tables, digits, lines and the record. Knows no standard and no report."""
