"""Criteria for the end of laminar flow, one file each."""
