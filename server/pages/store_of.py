"""The store that answers a request."""

from fastapi import Request

from server.store.store import Store


def store_of(request: Request) -> Store:
    """Return the application's store."""
    store: Store = request.app.state.store
    return store
