"""Answers as pages: a verdict, tables and notes, and a page as terminal text, Markdown or CSV.

A leaf: it imports values only, so that the command line and report plugins show the same tables in the same words.
`drains`, `refills`, `ceiling`, `grows` and `assumptions` turn a Result into blocks; `plain`, `markdown` and `csvtext`
turn blocks into text.
"""
