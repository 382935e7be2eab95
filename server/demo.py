"""The demo stations, of an invented town, put into a store that does not have them."""

from server.resources import folder
from server.station.reader import read_station
from server.store.station_ids import demo_station_id
from server.store.store import Store


def load_demo(store: Store) -> tuple[str, ...]:
    """Load each demo station that was never loaded here, and return the ids of all of them.

    One that was edited or archived since is left as it is.
    """
    found = []
    for file in sorted(folder("seed_demo").glob("*.json")):
        station_id = demo_station_id(file.stem)
        if not store.exists(station_id):
            store.create(read_station(file.read_bytes()), "local", "demo", station_id)
        found.append(station_id)
    return tuple(found)
