"""The report: a record and the notebook's own text become HTML and PDF, sealed and written together.

Knows the record and nothing of how a line is computed. Modules share `view`, the one document model that both writers
print.
"""
