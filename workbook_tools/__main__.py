"""`python -m workbook_tools`."""

from __future__ import annotations

import sys

from workbook_tools.command import main

sys.exit(main())
