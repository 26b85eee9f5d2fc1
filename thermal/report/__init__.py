"""What a reader gets: tables, files and figures."""
