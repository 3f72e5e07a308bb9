"""``python -m opto_ckt`` is the same as ``opto-ckt``."""

from __future__ import annotations

from opto_ckt.cli.main import main

if __name__ == "__main__":
    main()
