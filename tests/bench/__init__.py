"""Timings, run by hand; no test."""
