"""`python -m epochconv`."""

from __future__ import annotations

import sys

from epochconv.command import main

sys.exit(main())
