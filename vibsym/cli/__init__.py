"""The command line: parse, call, hand the result to the report."""
