"""The tables as the program uses them; schema_steps makes them."""

from sqlalchemy import Boolean, Column, Integer, LargeBinary, MetaData, String, Table

metadata = MetaData()

station = Table(
    "station",
    metadata,
    Column("id", String, primary_key=True),
    # of the newest document, so that the list of stations opens none
    Column("title", String, nullable=False),
    Column("job_number", String, nullable=False),
    Column("place", String, nullable=False),
    Column("newest", Integer, nullable=False),
    Column("archived", Boolean, nullable=False),
)
document = Table(
    "document",
    metadata,
    Column("hash", String, primary_key=True),
    Column("version", Integer, nullable=False),
    Column("body", LargeBinary, nullable=False),
)
revision = Table(
    "revision",
    metadata,
    Column("station", String, primary_key=True),
    Column("number", Integer, primary_key=True),
    Column("parent", Integer),
    Column("document_hash", String, nullable=False),
    Column("author", String, nullable=False),
    Column("made_at", String, nullable=False),
    Column("kind", String, nullable=False),
    # what led here from the parent, as JSON, so that History opens no document
    Column("changes", String, nullable=False),
    # the revision that an undo or redo took back, or that was restored
    Column("of", Integer),
)
