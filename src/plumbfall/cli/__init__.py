"""The command line: arguments to calls to an exit code; no arithmetic. One command a file."""
