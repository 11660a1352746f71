"""What the app asks of the device, each behind a small interface: storage, files, sharing, the clock."""
