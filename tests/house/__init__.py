"""Tests of the house rules."""
