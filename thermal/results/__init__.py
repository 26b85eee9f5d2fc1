"""What a run leaves behind."""
