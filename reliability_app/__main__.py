"""Runs the command `rigpaper` as `python -m reliability_app`."""

import sys

from reliability_app.command_line import main

sys.exit(main())
