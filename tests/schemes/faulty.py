"""Advection that does not move, with one fault, named by the first argument. Standard library only."""
import json, os, signal, subprocess, sys, time

fault = sys.argv[1]
out = os.fdopen(os.dup(1), "wb", buffering=0)
os.dup2(2, 1)
print("faulty.py: about to", fault, file=sys.stderr, flush=True)


def say(text):
    data = text if isinstance(text, bytes) else text.encode()
    while data:
        data = data[out.write(data) :]


def tell(value):
    say(json.dumps(value) + "\n")


def forever():
    while True:
        time.sleep(3600)


def child(*words, **how):
    return subprocess.Popen(words, **how)


def ask(method, **params):
    tell({"jsonrpc": "2.0", "id": 1, "method": method, "params": params})
    return json.loads(sys.stdin.readline())


def no_terminate():
    signal.signal(signal.SIGTERM, signal.SIG_IGN)


offer = {"equation": "advection", "operations": ["advance"], "boundaries": ["periodic", "value", "none"], "source": True}
about = {"contract": 1, "name": "faulty", "version": "1", "arrays": ["text", "base64"] if "base64" in fault else ["text"], "offers": [offer]}

# Faults of start-up and of `describe`: what is answered instead, or what is done.
at_start = {
    "exits at once": lambda: sys.exit(3),
    "exits at once with status 0": lambda: sys.exit(0),
    "raises": lambda: [][1],
    "hangs at start": forever,
    "ignores SIGTERM and hangs at start": lambda: (no_terminate(), forever()),
}
descriptions = {
    "contract 2": {**about, "contract": 2, "novelty": True},
    "contract one": {**about, "contract": "one"},
    "no contract": {k: v for k, v in about.items() if k != "contract"},
    "no name": {k: v for k, v in about.items() if k != "name"},
    "empty name": {**about, "name": " "},
    "unknown key": {**about, "ofers": []},
    "no offers": {**about, "offers": []},
    "offers a number": {**about, "offers": 7},
    "unknown operation": {**about, "offers": [{**offer, "operations": ["advanced"]}]},
    "four dimensions": {**about, "offers": [{**offer, "dimensions": [4]}]},
    "no operations": {**about, "offers": [{**offer, "operations": []}]},
    "describes as list": [about],
    "describes as null": None,
}
# Faults of `prepare`.
preparations = {"nodes for nothing": {"offsets": [0.5], "weights": [1.0]}, "prepares a list": [], "prepares a stranger": {"mesh": 1}}
# Answers to `advance`, given the id and the right state.
answers = {
    "too short": lambda i, u: {"state": {"u": u[1:]}},
    "too long": lambda i, u: {"state": {"u": u + [0.0]}},
    "empty array": lambda i, u: {"state": {"u": []}},
    "array a text": lambda i, u: {"state": {"u": "zero"}},
    "array a number": lambda i, u: {"state": {"u": 0.0}},
    "array an object": lambda i, u: {"state": {"u": {"0": 0.0}}},
    "array of texts": lambda i, u: {"state": {"u": [str(v) for v in u]}},
    "array of arrays": lambda i, u: {"state": {"u": [[v] for v in u]}},
    "array of booleans": lambda i, u: {"state": {"u": [0.0] + [True] * (len(u) - 1)}},
    "field missing": lambda i, u: {"state": {}},
    "field unknown": lambda i, u: {"state": {"u": u, "v": u}},
    "state missing": lambda i, u: {},
    "state null": lambda i, u: {"state": None},
    "state an array": lambda i, u: {"state": u},
    "result null": lambda i, u: None,
    "base64 that is none": lambda i, u: {"state": {"u": "no base64!"}},
    "base64 of odd bytes": lambda i, u: {"state": {"u": "AAAAAAAA8D8A"}},
    "base64 too short": lambda i, u: {"state": {"u": "AAAAAAAA8D8="}},
}
# Whole lines in answer to `advance`.
lines = {
    "no JSON": lambda i: "{state: 1}\n",
    "half JSON": lambda i: '{"jsonrpc": "2.0", "id": %d, "result": {"state": {"u": [1.0,\n' % i,
    "invalid UTF-8": lambda i: b'{"jsonrpc": "2.0", "id": 1, "result": "\xff\xfe"}\n',
    "nested JSON": lambda i: '{"jsonrpc": "2.0", "id": 1, "result": ' + '{"a":' * 100000 + "1" + "}" * 100000 + "}\n",
    "nested lists": lambda i: '{"jsonrpc": "2.0", "id": 1, "result": ' + "[" * 100000 + "]" * 100000 + "}\n",
    "a huge number": lambda i: '{"jsonrpc": "2.0", "id": 1e999, "result": {}}\n',
    "no version of JSON-RPC": lambda i: '{"id": %d, "result": {}}\n' % i,
    "no id": lambda i: '{"jsonrpc": "2.0", "result": {}}\n',
    "both result and error": lambda i: '{"jsonrpc": "2.0", "id": %d, "result": {}, "error": {"code": 1, "message": ""}}\n' % i,
    "neither result nor error": lambda i: '{"jsonrpc": "2.0", "id": %d}\n' % i,
    "an error without a code": lambda i: '{"jsonrpc": "2.0", "id": %d, "error": "broken"}\n' % i,
    "another id": lambda i: '{"jsonrpc": "2.0", "id": 4711, "result": {}}\n',
    "an id of text": lambda i: '{"jsonrpc": "2.0", "id": "%d", "result": {}}\n' % i,
    "many small lists": lambda i: '{"jsonrpc": "2.0", "id": %d, "result": [%s]}\n' % (i, ",".join(["[1]"] * 100000)),
    "the id of an earlier request": lambda i: '{"jsonrpc": "2.0", "id": 1, "result": {}}\n',
}


def flood(descriptor, data):
    while True:
        os.write(descriptor, data)


def fork_bomb():
    for _ in range(40):
        child("sleep", "3600")
    forever()


def callbacks(method, **params):
    ask(method, **params)


deeds = {
    "exits in the middle": lambda: os._exit(5),
    "raises in the middle": lambda: {}["velocity"],
    **{name: (lambda number=number: (os.kill(os.getpid(), number), forever()))
       for name, number in [("SIGSEGV", 11), ("SIGABRT", 6), ("SIGKILL", 9), ("SIGTERM", 15), ("SIGFPE", 8), ("SIGBUS", 7), ("SIGILL", 4), ("SIGPIPE", 13)]},
    "hangs": forever,
    "hangs and ignores SIGTERM": lambda: (no_terminate(), forever()),
    "hangs in the middle of a line": lambda: (say('{"jsonrpc": "2.0", "id": '), forever()),
    "floods stdout with lines": lambda: flood(out.fileno(), b"the weather is fine\n" * 100),
    "floods stdout without an end of line": lambda: flood(out.fileno(), b"{" + b" " * 65536),
    "floods stderr": lambda: flood(2, b"the weather is fine\n" * 100),
    "closes stdout": lambda: (out.close(), forever()),
    "closes stdout and stderr": lambda: (out.close(), os.close(1), os.close(2), forever()),
    "leaves a child and exits": lambda: (child("sleep", "3600"), os._exit(6)),
    "leaves a child that left the group and exits": lambda: (child("sleep", "3600", start_new_session=True), os._exit(6)),
    "has a stubborn family and hangs": lambda: (no_terminate(), child("sleep", "3600", start_new_session=True),
        child(sys.executable, "-c", "import os, signal, time\nsignal.signal(15, 1)\nos.fork() or os.setsid()\ntime.sleep(3600)"), forever()),
    "has too many processes": fork_bomb,
    "allocates": lambda: bytearray(1 << 40),
    "a bad side": lambda: callbacks("boundary", time=0.0, side="x_middle"),
    "a side of number": lambda: callbacks("boundary", time=0.0, side=3),
    "side and sides": lambda: callbacks("boundary", time=0.0, side="x_lower", sides=["x_upper"]),
    "no side": lambda: callbacks("boundary", time=0.0),
    "too many layers": lambda: callbacks("boundary", time=0.0, side="x_lower", layers=100000),
    "a bad time": lambda: callbacks("source", time=float("nan")),
    "an infinite time": lambda: callbacks("source", time=float("inf")),
    "a time of text": lambda: callbacks("source", time="now"),
    "no time": lambda: callbacks("source"),
    "uneven points": lambda: callbacks("source", time=0.0, points=[[0.1], [0.2, 0.3]]),
    "points a number": lambda: callbacks("source", time=0.0, points=7),
    "a question unknown": lambda: callbacks("weather", time=0.0),
    "a question with a stranger": lambda: callbacks("source", time=0.0, when=1.0),
    "no name of coefficient": lambda: callbacks("coefficient", time=0.0),
}

if fault in at_start:
    at_start[fault]()
for line in sys.stdin:
    request = json.loads(line)
    method, number, params = request["method"], request["id"], request["params"]
    result = {"jsonrpc": "2.0", "id": number}
    if method == "describe":
        if fault == "refuses to describe":
            tell({**result, "error": {"code": -32601, "message": "I am nobody"}})
        elif fault == "says something else":
            say('{"hello": "world"}\n')
        else:
            tell({**result, "result": descriptions.get(fault, about)})
    elif method == "prepare":
        tell({**result, "result": preparations.get(fault, {})})
        if fault == "answers twice":
            tell({**result, "result": {}})
        if fault == "closes stdin":
            os.close(0)
            out.close()
            forever()
    elif fault in lines:
        say(lines[fault](number))
    else:
        u = params["state"]["u"]
        if fault in deeds:
            deeds[fault]()
        answer = answers[fault](number, u) if fault in answers else {"state": {"u": u}}
        tell({**result, "result": answer})
        if fault == "stays after the end":
            no_terminate()
            child("sleep", "3600", start_new_session=True)
if fault == "stays after the end":
    forever()
