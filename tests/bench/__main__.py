"""`python -m tests.bench [part of a name ...]`: measure and print, exit 1 if over budget."""

import sys

from tests.bench.registry import benches, machine


def main(wanted: list[str]) -> int:
    """Run the benches whose name holds one of the words, or all."""
    print(machine())
    over = 0
    for name, function in benches().items():
        if wanted and not any(word in name for word in wanted):
            continue
        for measurement in function():
            print(measurement.line(), flush=True)
            over += not measurement.holds
    return 1 if over else 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
