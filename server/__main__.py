"""`python -m server` is the `firmhead` command."""

import sys

from server.cli import main

sys.exit(main())
