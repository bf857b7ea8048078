"""SPARQL over facts and saved runs, safe against strangers' queries.

tokens   a query's text as tokens
guard    what a query may not do: update, fetch, read files; and the graphs it asks for
dataset  facts and the runs of a results folder in one store that keeps up with the folder
wire     what passes between a service and its workers
work     one query, in a worker: guarded, measured, without new files or connections
nursery  a process that has the data loaded and forks workers from it
pool     workers that are killed at the deadline and replaced
formats  result formats and their media types
named    the queries that ship with Headrace
ask      one query for the command line
"""
