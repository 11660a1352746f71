"""One thin file a screen."""
