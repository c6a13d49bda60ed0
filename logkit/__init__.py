"""logkit: from a typed table of beds to a checked, drawn and hydraulically read sedimentary log."""
