"""The plugins that ship with Headrace, through the same hooks as a stranger's: one file or folder = one plugin."""
