/* Lax-Wendroff differences for u_t + a u_x = 0 on a periodic grid. */
#include <stdint.h>
#include <stdlib.h>
#include <string.h>

#include "gridassay_scheme.h"

static double velocity, spacing;
static const char *message;

int32_t gridassay_contract(void) { return GRIDASSAY_CONTRACT; }

const char *gridassay_describe(void) {
    return "{\"contract\": 1, \"name\": \"lax-wendroff in C\", \"version\": \"1.0\", \"offers\": [{"
           "\"equation\": \"advection\", \"operations\": [\"advance\"], \"cells\": {\"minimum\": 3}}]}";
}

const char *gridassay_message(void) { return message; }

int32_t gridassay_prepare(const gridassay_case *problem, const gridassay_harness *harness) {
    (void)harness;
    message = "this scheme takes `advection` in one dimension";
    if (strcmp(problem->equation, "advection") != 0 || problem->dimensions != 1) return GRIDASSAY_NOT_OFFERED;
    for (int32_t k = 0; k < problem->parameter_count; ++k)
        if (strcmp(problem->parameters[k].name, "velocity") == 0) velocity = problem->parameters[k].values[0];
    spacing = (problem->upper[0] - problem->lower[0]) / (double)problem->cells[0];
    return GRIDASSAY_OK;
}

int32_t gridassay_advance(double time, double step, int64_t steps, gridassay_state *state, gridassay_state *earlier,
                          const gridassay_harness *harness) {
    (void)time, (void)earlier, (void)harness;
    const int64_t n = state->lengths[0];
    const double c = velocity * step / spacing;
    double *u = state->values[0];
    double *flux = malloc((size_t)(n + 1) * sizeof *flux); /* flux[j]: through the lower face of cell j */
    if (!flux) {
        message = "out of memory";
        return GRIDASSAY_FAILED;
    }
    for (int64_t k = 0; k < steps; ++k) {
        for (int64_t j = 0; j < n; ++j) {
            const double left = u[j > 0 ? j - 1 : n - 1];
            flux[j] = 0.5 * c * (u[j] + left) - 0.5 * c * c * (u[j] - left);
        }
        flux[n] = flux[0];
        for (int64_t j = 0; j < n; ++j) u[j] -= flux[j + 1] - flux[j];
    }
    free(flux);
    return GRIDASSAY_OK;
}
