"""The document as entered: models, paths, canonical bytes, edits. Knows units, nothing above."""
