"""First-order upwind differences for u_t + a u_x = S, a >= 0: periodic, or inflow prescribed on the left. Standard library only."""
import array, base64, json, os, sys

out = os.fdopen(os.dup(1), "w")  # the conversation; whatever else is printed goes to stderr
os.dup2(2, 1)
ENCODINGS = ["text", "base64"] if "base64" in sys.argv else ["text"]
case = {}


def read(a):
    return array.array("d", base64.b64decode(a) if isinstance(a, str) else a)


def write(a):
    return base64.b64encode(array.array("d", a)).decode() if case.get("arrays") == "base64" else list(a)


def ask(method, **params):
    print(json.dumps({"jsonrpc": "2.0", "id": 1, "method": method, "params": params}), file=out, flush=True)
    return json.loads(sys.stdin.readline())["result"]


def rate(time, u):
    a, h = case["parameters"]["velocity"][0], (case["grid"]["upper"][0] - case["grid"]["lower"][0]) / len(u)
    inflow = u[-1] if case["boundaries"][0][0] == "periodic" else read(ask("boundary", time=time, side="x_lower")["value"]["u"])[0]
    slope = [-(a * ((u[j] - (u[j - 1] if j else inflow)) / h)) for j in range(len(u))]
    return [r + s for r, s in zip(slope, read(ask("source", time=time)["u"]))] if case["source"] else slope


def answer(method, p):
    if method == "describe":
        offer = {"equation": "advection", "operations": ["advance", "rate"], "boundaries": ["periodic", "value", "none"],
                 "source": True, "parameters": {"velocity": [0, None]}}
        return {"contract": 1, "name": "upwind", "version": "1.0", "arrays": ENCODINGS, "offers": [offer]}
    if method == "prepare":
        return case.update(p) or {}
    u, time = read(p["state"]["u"]), p["time"]
    if method == "rate":
        return {"rate": {"u": write(rate(time, u))}}
    for n in range(p["steps"]):
        u = [v + p["step"] * r for v, r in zip(u, rate(time + n * p["step"], u))]
    return {"state": {"u": write(u)}}


for line in sys.stdin:
    request = json.loads(line)
    print(json.dumps({"jsonrpc": "2.0", "id": request["id"], "result": answer(request["method"], request["params"])}), file=out, flush=True)
