/* First-order upwind differences for u_t + a u_x = S, a >= 0, over the C ABI: the same arithmetic as upwind.py. */
#include <stdlib.h>
#include <string.h>

#include "gridassay_scheme.h"

static double velocity, length;
static int periodic, source;

int32_t gridassay_contract(void) { return GRIDASSAY_CONTRACT; }

const char *gridassay_describe(void) {
    return "{\"contract\": 1, \"name\": \"upwind\", \"version\": \"1.0\", \"offers\": [{\"equation\": \"advection\","
           " \"operations\": [\"advance\", \"rate\"], \"boundaries\": [\"periodic\", \"value\", \"none\"],"
           " \"source\": true, \"parameters\": {\"velocity\": [0, null]}}]}";
}

int32_t gridassay_prepare(const gridassay_case *problem, const gridassay_harness *harness) {
    (void)harness;
    for (int32_t k = 0; k < problem->parameter_count; ++k)
        if (!strcmp(problem->parameters[k].name, "velocity")) velocity = problem->parameters[k].values[0];
    length = problem->upper[0] - problem->lower[0];
    periodic = problem->boundaries[0] == GRIDASSAY_PERIODIC;
    source = problem->source;
    return GRIDASSAY_OK;
}

int32_t gridassay_rate(double time, const gridassay_state *state, gridassay_state *rate, const gridassay_harness *harness) {
    const int64_t n = state->lengths[0];
    const double *u = state->values[0];
    double *r = rate->values[0], h = length / (double)n, inflow = u[n - 1];
    int32_t code = periodic ? 0 : harness->boundary(harness->context, time, GRIDASSAY_X_LOWER, 0, 1, &inflow, NULL);
    if (code) return code;
    if (source && (code = harness->source(harness->context, time, 0, NULL, n, r))) return code;
    for (int64_t j = 0; j < n; ++j) {
        double slope = -(velocity * ((u[j] - (j ? u[j - 1] : inflow)) / h));
        r[j] = source ? slope + r[j] : slope;
    }
    return GRIDASSAY_OK;
}

int32_t gridassay_advance(double time, double step, int64_t steps, gridassay_state *state, gridassay_state *earlier,
                          const gridassay_harness *harness) {
    (void)earlier;
    const int64_t n = state->lengths[0];
    double *r = malloc((size_t)n * sizeof *r);
    gridassay_state rate = {1, state->lengths, &r};
    int32_t code = GRIDASSAY_OK;
    for (int64_t k = 0; k < steps && !code; ++k) {
        code = gridassay_rate(time + (double)k * step, state, &rate, harness);
        for (int64_t j = 0; j < n && !code; ++j) state->values[0][j] += step * r[j];
    }
    free(r);
    return code;
}
