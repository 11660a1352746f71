"""The app: screens on the core, and the bundle that makes it installable."""
