"""Shared by all tests; its place puts this folder on the import path (tools)."""
