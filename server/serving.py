"""Start the program: data folder, demo, socket, address; a refusal is one sentence."""

import errno
import gc
import socket
from collections.abc import Callable

import uvicorn

from server.app import create_app
from server.demo import load_demo
from server.settings import Settings
from server.store.problems import StoreRefused


class ServingRefused(Exception):
    """The program cannot be started; the text is one sentence for a person."""


def serve(settings: Settings, say: Callable[[str], None]) -> None:
    """Serve until interrupted.

    Parameters
    ----------
    settings : Settings
        Port 0 takes a free one.
    say : callable
        Is told the address and the data folder, a line each.

    Raises
    ------
    ServingRefused
        If the port is taken or the data folder cannot be used.
    """
    listening = _listen(settings)
    try:
        try:
            app = create_app(settings)
        except StoreRefused as problem:
            raise ServingRefused(str(problem)) from problem
        if settings.demo:
            load_demo(app.state.store)
        spare_collector()
        server = uvicorn.Server(
            uvicorn.Config(
                app, log_level="warning", server_header=False, lifespan="on", ws="none"
            )
        )
        host, port = listening.getsockname()[:2]
        say(f"Firmhead is at http://{host}:{port}/ (Ctrl+C stops it).")
        say(f"Stations are kept in {settings.data_folder}.")
        server.run(sockets=[listening])
    except KeyboardInterrupt:
        pass
    finally:
        listening.close()


def spare_collector() -> None:
    """Let the collector of garbage pass over what was loaded at the start, and look less often.

    An edit makes some ten thousand short-lived objects, freed by count; looking through the
    whole program for cycles every few hundred of them took a tenth of the edit.
    """
    gc.collect()
    gc.freeze()
    gc.set_threshold(20_000, 20, 20)


def _listen(settings: Settings) -> socket.socket:
    """Return a socket on the port, so that a taken one is told before anything else is done."""
    listening = socket.socket(socket.AF_INET, socket.SOCK_STREAM)
    # a port left a moment ago may be used again; one that is served by another program may not
    listening.setsockopt(socket.SOL_SOCKET, socket.SO_REUSEADDR, 1)
    try:
        listening.bind((settings.host, settings.port))
        listening.listen(128)
    except OSError as problem:
        listening.close()
        if problem.errno == errno.EADDRINUSE:
            why = "is taken by another program, perhaps by a Firmhead that still runs"
        else:
            why = f"cannot be used ({problem.strerror or problem})"
        sentence = (
            f"Port {settings.port} {why}; choose another with --port, or 0 for a free one."
        )
        raise ServingRefused(sentence) from problem
    return listening
