"""A family of schemes for dye in a mill race: upwind differences with a share of the second-order correction.

    u_j <- u_j - c (F_j - F_{j-1}),   F_j = u_j + share (1 - c)/2 (u_{j+1} - u_j),   c = a dt / h, a > 0

Share 0 is first-order upwind, share 1 the scheme of Lax and Wendroff (1960); shares between them are of first order.
"""
import json, os, sys

share = float(sys.argv[1])
out = os.fdopen(os.dup(1), "w")
os.dup2(2, 1)
case = {}


def step(u, c):
    n = len(u)
    flux = [u[j] + share * (1 - c) / 2 * (u[(j + 1) % n] - u[j]) for j in range(n)]
    return [u[j] - c * (flux[j] - flux[j - 1]) for j in range(n)]


def answer(method, p):
    if method == "describe":
        offer = {"equation": "advection", "operations": ["advance"], "parameters": {"velocity": [0, None]}}
        return {"contract": 1, "name": f"mill race, share {share:g}", "version": "0.3", "offers": [offer]}
    if method == "prepare":
        case.update(p)
        return {}
    u, grid = p["state"]["u"], case["grid"]
    h = (grid["upper"][0] - grid["lower"][0]) / grid["cells"][0]
    for _ in range(p["steps"]):
        u = step(u, case["parameters"]["velocity"][0] * p["step"] / h)
    return {"state": {"u": u}}


for line in sys.stdin:
    request = json.loads(line)
    result = answer(request["method"], request["params"])
    print(json.dumps({"jsonrpc": "2.0", "id": request["id"], "result": result}), file=out, flush=True)
