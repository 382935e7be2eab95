"""Ids of list items: two letters for the kind, a dash, six random characters."""

import re
import secrets
from collections.abc import Container

ALPHABET = "0123456789abcdefghjkmnpqrstvwxyz"
# A double or a trailing dash would make the HTML id of a path ambiguous, so ids have none.
ID = re.compile(r"[a-z](?:-?[a-z0-9])+")
LONGEST_ID = 32
LONGEST_RULE_KEY = 41
ID_IN_WORDS = "a small letter, then small letters, digits and single dashes, 2 to 32 signs"

_KINDS = {
    "/supply/flow_tests": "ft",
    "/suction_line/reaches": "rc",
    "/discharge_main/reaches": "rc",
    "/legs": "lg",
    "/zone/points": "pt",
    "/horizons": "hz",
    "/fires": "fr",
    "/scenarios": "sc",
    "/pumps": "pu",
    "/sets": "st",
    "/answers": "an",
    "/memo/notes": "mn",
    "/criteria/rows": "cr",
}
_INNER_KINDS = {"fittings": "fi", "curves": "cu", "slots": "sl", "stages": "lv"}


def kind_letters(list_path: str) -> str:
    """Return the two letters of the items of the list at `list_path`; KeyError if none."""
    return _KINDS.get(list_path) or _INNER_KINDS[list_path.rpartition("/")[2]]


def new_id(list_path: str, taken: Container[str]) -> str:
    """Return a fresh id for an item of the list at `list_path` that is not in `taken`."""
    letters = kind_letters(list_path)
    while True:
        made = f"{letters}-{''.join(secrets.choice(ALPHABET) for _ in range(6))}"
        if made not in taken:
            return made


def is_id(text: object, longest: int = LONGEST_ID) -> bool:
    """Whether `text` may be an item's id (or, with its own length, a rule's key)."""
    return isinstance(text, str) and len(text) <= longest and ID.fullmatch(text) is not None
