"""Readers of single cells: text in, a `Reading` out. They know neither files nor rows, and never raise."""
