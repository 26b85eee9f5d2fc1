"""Words of the command line; nothing heavy is imported before a command runs."""
