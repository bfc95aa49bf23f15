"""Qt windows: they show the session and turn gestures into edits."""
