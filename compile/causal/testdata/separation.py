# Answers questions of d-separation with networkx, and times the answers alone,
# the fastest of so many passes.
# In: JSON, a list of graphs {nodes, arrows, questions: [[a, b, [given]]]}.
# Out: JSON, the answers in order and the seconds they took.
import json
import sys
import time

import networkx as nx

# The function was renamed in networkx 3.3.
separated = getattr(nx, "is_d_separator", None) or nx.d_separated

cases = []
for case in json.load(sys.stdin):
    graph = nx.DiGraph()
    graph.add_nodes_from(range(case["nodes"]))
    graph.add_edges_from(case["arrows"])
    cases.append((graph, [({a}, {b}, set(given)) for a, b, given in case["questions"]]))

seconds = float("inf")
for _ in range(int(sys.argv[1])):
    start = time.perf_counter()
    answers = [separated(graph, *question) for graph, questions in cases for question in questions]
    seconds = min(seconds, time.perf_counter() - start)
json.dump({"version": nx.__version__, "answers": answers, "seconds": seconds}, sys.stdout)
