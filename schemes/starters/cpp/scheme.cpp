// Lax-Wendroff differences for u_t + a u_x = 0 on a periodic grid.
#include <cstdint>
#include <exception>
#include <string>
#include <vector>

#include "gridassay_scheme.h"

namespace {

std::string message;

class LaxWendroff {
public:
    void prepare(double velocity_, double spacing_) {
        velocity = velocity_;
        spacing = spacing_;
    }

    void advance(double step, std::int64_t steps, double *u, std::size_t n) {
        const double c = velocity * step / spacing;
        flux.resize(n + 1);  // flux[j]: through the lower face of cell j
        for (std::int64_t k = 0; k < steps; ++k) {
            for (std::size_t j = 0; j < n; ++j) {
                const double left = u[j > 0 ? j - 1 : n - 1];
                flux[j] = 0.5 * c * (u[j] + left) - 0.5 * c * c * (u[j] - left);
            }
            flux[n] = flux[0];
            for (std::size_t j = 0; j < n; ++j) u[j] -= flux[j + 1] - flux[j];
        }
    }

private:
    double velocity = 0, spacing = 1;
    std::vector<double> flux;
};

LaxWendroff scheme;

// No exception may leave an exported function.
template <class Call>
std::int32_t guarded(Call call) {
    try {
        return call();
    } catch (const std::exception &error) {
        message = error.what();
        return GRIDASSAY_FAILED;
    }
}

}  // namespace

extern "C" {

std::int32_t gridassay_contract(void) { return GRIDASSAY_CONTRACT; }

const char *gridassay_describe(void) {
    return R"({"contract": 1, "name": "lax-wendroff in C++", "version": "1.0",
               "offers": [{"equation": "advection", "operations": ["advance"], "cells": {"minimum": 3}}]})";
}

const char *gridassay_message(void) { return message.c_str(); }

std::int32_t gridassay_prepare(const gridassay_case *problem, const gridassay_harness *) {
    return guarded([&] {
        if (std::string(problem->equation) != "advection" || problem->dimensions != 1) {
            message = "this scheme takes `advection` in one dimension";
            return GRIDASSAY_NOT_OFFERED;
        }
        double velocity = 0;
        for (std::int32_t k = 0; k < problem->parameter_count; ++k)
            if (std::string(problem->parameters[k].name) == "velocity") velocity = problem->parameters[k].values[0];
        scheme.prepare(velocity, (problem->upper[0] - problem->lower[0]) / static_cast<double>(problem->cells[0]));
        return GRIDASSAY_OK;
    });
}

std::int32_t gridassay_advance(double, double step, std::int64_t steps, gridassay_state *state, gridassay_state *,
                               const gridassay_harness *) {
    return guarded([&] {
        scheme.advance(step, steps, state->values[0], static_cast<std::size_t>(state->lengths[0]));
        return GRIDASSAY_OK;
    });
}

}  // extern "C"
