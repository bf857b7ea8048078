"""One line in a test file tells whether a plugin keeps the contract:

    from headrace.testing import conformance

    def test_my_plugin_conforms() -> None:
        conformance(MyPlugin)
"""

from headrace.testing.suite import conformance

__all__ = ["conformance"]
