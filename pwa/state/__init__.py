"""What the app knows while it runs: observable models with verbs, no controls, no storage."""
