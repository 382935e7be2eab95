"""What is kept: stations, their revisions and documents, in one SQLite file."""
