"""Ids of stations: eight characters that read without mistake and do not count them."""

import hashlib
import secrets

ALPHABET = "0123456789abcdefghjkmnpqrstvwxyz"  # without i l o u
LENGTH = 8


def new_station_id() -> str:
    """Return a random station id."""
    return "".join(secrets.choice(ALPHABET) for _ in range(LENGTH))


def demo_station_id(name: str) -> str:
    """Return the id under which a demo station is kept, so that it is loaded only once."""
    digest = hashlib.sha256(f"demo {name}".encode()).digest()
    return "".join(ALPHABET[byte % len(ALPHABET)] for byte in digest[:LENGTH])
