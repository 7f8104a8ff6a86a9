"""Standards: a folder for each family, found by being here.

Each folder offers `EDITIONS`. Must not know any one standard.
"""
