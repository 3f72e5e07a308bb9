"""Drivers."""
