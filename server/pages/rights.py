"""The right that each address needs, and who asks for it.

Until there are people, whoever reaches the program is the local actor, who has every right;
only loopback addresses are served.
"""

from dataclasses import dataclass
from typing import Any, Literal

from fastapi import Depends, HTTPException, Request

Right = Literal["read", "edit", "check", "own", "public"]
RIGHTS: tuple[Right, ...] = ("read", "edit", "check", "own", "public")


@dataclass(frozen=True, slots=True)
class Actor:
    """Who asks: the name under which changes are stored, and what may be done."""

    name: str
    rights: frozenset[Right]


LOCAL = Actor("local", frozenset(RIGHTS))


def actor_of(request: Request) -> Actor:
    """Return who makes a request."""
    return LOCAL


@dataclass(frozen=True, slots=True)
class Needs:
    """The check of one right, run before the route."""

    right: Right

    def __call__(self, request: Request) -> Actor:
        """Return the actor; 403 if the right is missing."""
        actor = actor_of(request)
        if self.right not in actor.rights:
            sentence = (
                f"This needs the right to {self.right}, which {actor.name} does not have."
            )
            raise HTTPException(403, sentence)
        return actor


def needs(right: Right) -> Any:  # FastAPI gives its dependencies no type of their own
    """Return the declaration, for a route's `dependencies`, that the route needs `right`."""
    return Depends(Needs(right))
