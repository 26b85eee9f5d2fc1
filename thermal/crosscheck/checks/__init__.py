"""The rows of the verification table: what a run calls, held against closed solutions and measurements."""
