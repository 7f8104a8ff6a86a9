"""Tests of calckit; the folders mirror the package."""
