"""Why a data folder cannot be used."""


class StoreRefused(Exception):
    """The data folder or its file cannot be used; the text is one sentence for a person."""
