"""Studies: what is computed from a document, as pure functions of it."""
