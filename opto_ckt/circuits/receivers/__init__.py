"""Receivers."""
