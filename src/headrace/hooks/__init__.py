"""Where plugins meet the core: the five hooks, who may claim what, and the one place that applies proposals.

`specs` are the hooks. `entry` describes a plugin and refuses a wrong one. `strangers` finds installed plugins,
`table` lists those that ship with Headrace. `manager` loads and calls them, `merge` applies what they propose.
"""
