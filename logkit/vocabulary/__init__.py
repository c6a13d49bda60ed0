"""Terms of the trade as data: structures, lithologies, contacts, gaps, indicators, fossils, codes."""
