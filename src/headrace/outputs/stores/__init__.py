"""Bigger stores: any SPARQL 1.1 endpoint with the Graph Store HTTP Protocol.

address   where a store answers queries and where it takes graphs
http      requests to a store: time limit, size limit, no redirects, Basic or Digest
store     graphs put, fetched and deleted; queries asked
results   a store's answer brought into the standard's form
remote    a store as the engine of queries and of the service
push      the facts pushed to a store
"""
