"""Deliberate: rehearse a contested meeting before it happens."""
