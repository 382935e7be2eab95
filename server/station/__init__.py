"""The document as entered: models, paths, canonical bytes, edits; knows units, no more."""
