"""Turns the Python sources into a static site that installs as an app and runs without a network."""
