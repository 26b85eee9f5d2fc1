"""Transient thermal simulation of induction-heated workpieces."""
