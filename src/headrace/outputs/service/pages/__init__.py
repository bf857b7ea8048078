"""Pages for people. Each works without a script; all text from data goes through `markup`, which escapes it."""
