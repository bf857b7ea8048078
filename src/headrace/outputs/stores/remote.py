"""A store as the engine of `headrace query` and of the service: the same guard, limits and replies as workers have."""

from __future__ import annotations

from headrace.errors import HeadraceError, InputError
from headrace.outputs.query import guard, wire
from headrace.outputs.query.run import Answered, answered, request
from headrace.outputs.service.site import Limits
from headrace.outputs.stores import results
from headrace.outputs.stores.http import SizeLimitError, StoreError, TimeLimitError
from headrace.outputs.stores.store import Store, open_store


class RemoteQueries:
    """Queries through a store."""

    def __init__(self, url: str, limits: Limits) -> None:
        self.store: Store = open_store(url)
        self.limits = limits

    def ask(self, request: wire.Request) -> wire.Reply:
        """The reply, whatever became of the query."""
        try:
            query = guard.check(request.text)
            answer = self.store.query(query, request.default, request.named, self.limits.seconds, self.limits.result)
            if query.form in ("select", "ask"):
                body = results.solutions(answer, request.solutions, asked=query.form == "ask")
                return wire.Reply(wire.OK, body, "solutions", request.solutions)
            return wire.Reply(wire.OK, results.graph(answer, request.graph), "graph", request.graph)
        except InputError as error:
            return wire.Reply(wire.BAD, message=str(error))
        except TimeLimitError:
            return wire.Reply(wire.SLOW, message=f"the query was stopped after {self.limits.seconds:g} seconds")
        except SizeLimitError as error:
            return wire.Reply(wire.LARGE, message=str(error))
        except StoreError as error:
            return wire.Reply(wire.BAD if error.status == 400 else wire.BROKEN, message=str(error))
        except HeadraceError as error:
            return wire.Reply(wire.BROKEN, message=str(error))


def ask(url: str, text: str, format: str, seconds: float) -> Answered:
    """The answer to one query. Raises InputError for a query that may not run, HeadraceError when it was stopped."""
    limits = Limits(seconds=seconds, result=200_000_000)
    return answered(RemoteQueries(url, limits).ask(request(text, format)), format)
