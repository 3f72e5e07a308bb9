"""Tests of the analyses."""
