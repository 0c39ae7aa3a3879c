"""Friction methods for turbulent flow, one file each."""
