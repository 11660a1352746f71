"""Reusable pieces of the screens; they know neither routes nor storage."""
