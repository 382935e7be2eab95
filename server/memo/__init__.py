"""The memo: sections return blocks of plain data, writers turn blocks into a page."""
