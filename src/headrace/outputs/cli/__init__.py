"""The command line, one file per command group: parse, call `headrace.run`, print.

`main` puts the commands together, `shared` has their common options, `seam` turns errors into one message and an exit
code, `terminal` writes to standard output, `progress` shows that long work goes on.
"""
