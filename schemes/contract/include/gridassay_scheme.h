/* The Gridassay scheme contract, version 1, as a C ABI.
 *
 * A scheme is a shared library that exports the functions at the end of this file. It can be written in C, C++, Fortran
 * (bind(c), iso_c_binding) or anything else that makes such libraries. One library is loaded into a process of its own, so that
 * global variables are fine: there is one scheme and one case at a time, and all calls come from one thread.
 *
 * Every pointer that a function is given belongs to the harness and is valid until that function returns: copy what has to last.
 * Every pointer that a function returns belongs to the library and must stay valid until the same function is called again.
 * Text is UTF-8 and ends with a zero byte. Arrays are flat with x fastest. Printing is fine: it goes to the log.
 */
#ifndef GRIDASSAY_SCHEME_H
#define GRIDASSAY_SCHEME_H

#include <stdint.h>

#ifdef __cplusplus
extern "C" {
#endif

/* What gridassay_contract() must return. */
#define GRIDASSAY_CONTRACT 1

/* What operations return. Any other number also means "tried and could not". */
#define GRIDASSAY_OK 0
#define GRIDASSAY_FAILED (-32000)       /* tried and could not */
#define GRIDASSAY_STEP_REFUSED (-32001) /* a step of this size is not allowed: taken as a bound that the scheme sets itself */
#define GRIDASSAY_NOT_PREPARED (-32002) /* no successful gridassay_prepare yet */
#define GRIDASSAY_PANICKED (-32003)     /* written by Rust plugins alone */
#define GRIDASSAY_NOT_OFFERED (-32601)  /* an equation, grid or boundary outside the offers */

/* Kinds of boundary. */
#define GRIDASSAY_PERIODIC 0
#define GRIDASSAY_VALUE 1    /* the value is prescribed */
#define GRIDASSAY_GRADIENT 2 /* the derivative along the outward normal is prescribed */
#define GRIDASSAY_NONE 3     /* nothing is prescribed */

/* Sides: 2 * direction + (0 at the lower end, 1 at the upper end). */
#define GRIDASSAY_X_LOWER 0
#define GRIDASSAY_X_UPPER 1
#define GRIDASSAY_Y_LOWER 2
#define GRIDASSAY_Y_UPPER 3
#define GRIDASSAY_Z_LOWER 4
#define GRIDASSAY_Z_UPPER 5

/* The state: one array a field, in the order of gridassay_case.fields. */
typedef struct gridassay_state {
    int32_t fields;         /* number of fields */
    const int64_t *lengths; /* [fields] number of values of each */
    double *const *values;  /* [fields] the arrays; operations leave their answer here */
} gridassay_state;

/* A parameter that is constant in the case. */
typedef struct gridassay_parameter {
    const char *name;     /* such as "velocity" */
    const double *values; /* [count] */
    int32_t count;        /* number of values: 1, or one for each dimension */
    int32_t is_vector;    /* 1 where the contract writes a list, 0 where it writes a number */
} gridassay_parameter;

/* What gridassay_prepare is asked with. */
typedef struct gridassay_case {
    const char *equation;                  /* such as "advection" */
    const char *const *fields;             /* [field_count] names of the fields, in the order of every state */
    const gridassay_parameter *parameters; /* [parameter_count] */
    const char *const *coefficients;       /* [coefficient_count] names of the parameters that vary: ask coefficient() */
    const int64_t *cells;                  /* [dimensions] */
    const double *lower;                   /* [dimensions] lower corner of the domain */
    const double *upper;                   /* [dimensions] upper corner of the domain */
    const double *const *edges;            /* stretched: [dimensions], each cells + 1 coordinates; else NULL */
    const double *const *vertices;         /* mapped: [dimensions], each over all cell corners, x fastest; else NULL */
    const int32_t *boundaries;             /* kind of field f at side s: boundaries[s * field_count + f] */
    int32_t dimensions;                    /* 1, 2 or 3 */
    int32_t field_count;
    int32_t parameter_count;
    int32_t coefficient_count;
    int32_t source;             /* 1: add a source term, by asking source() */
    int32_t steady_source;      /* 1: the source term does not depend on time; asking once is enough */
    int32_t steady_boundary;    /* 1: boundary data do not depend on time */
    int32_t steady_coefficient; /* 1: the coefficients do not depend on time */
} gridassay_case;

/* What a scheme may ask while it works on a call. Hand `context` back as it came. Functions that return int32_t return 0, or an
 * error code that the scheme should hand on as its own return value; those that return a count return it, or a negative number.
 * `length` is the number of values that the caller has room for: another number than the answer has is an error. */
typedef struct gridassay_harness {
    void *context;
    /* The source term of a field at its own positions (points NULL), or as point values at `length` points, where
     * points[d][i] is coordinate d of point i. */
    int32_t (*source)(void *context, double time, int32_t field, const double *const *points, int64_t length,
                      double *values);
    /* Value and derivative along the outward normal on a side; either array may be NULL. In one dimension length is 1. */
    int32_t (*boundary)(void *context, double time, int32_t side, int32_t field, int64_t length, double *value,
                        double *gradient);
    /* The exact solution in `layers` layers outside a side, nearest first: values[layer * length + i]. */
    int32_t (*ghost)(void *context, double time, int32_t side, int32_t field, int32_t layers, int64_t length,
                     double *values);
    /* A varying parameter; component 0 of a scalar, one component per dimension of a vector. Points as for source. */
    int32_t (*coefficient)(void *context, const char *name, double time, int32_t component,
                           const double *const *points, int64_t length, double *values);
    /* How many values the answers have, for schemes that do not count themselves. */
    int64_t (*source_length)(void *context, double time, int32_t field);
    int64_t (*boundary_length)(void *context, double time, int32_t side, int32_t field);
    int64_t (*coefficient_length)(void *context, const char *name, double time);
    int32_t (*coefficient_components)(void *context, const char *name, double time);
    /* Why the last of these functions failed. */
    const char *(*message)(void *context);
} gridassay_harness;

/* ---- Functions that every library exports ---- */

/* Returns GRIDASSAY_CONTRACT. */
int32_t gridassay_contract(void);

/* The answer to `describe` of the contract, as JSON text. `arrays` may be left out: no array is encoded on this way. */
const char *gridassay_describe(void);

/* Gets ready for a case; a later call replaces the earlier case. */
int32_t gridassay_prepare(const gridassay_case *problem, const gridassay_harness *harness);

/* ---- Functions for what the library offers; leave out the others ---- */

/* A library that carries several schemes: all later calls are for the scheme of this name. */
int32_t gridassay_select(const char *name);

/* Offers with `cell_nodes`, asked after gridassay_prepare: returns the number of nodes per cell and direction and, where it is at
 * most `capacity`, writes their positions in [0, 1], ascending, and their weights, which sum to 1. First asked with
 * capacity 0 and NULL. */
int32_t gridassay_nodes(int32_t capacity, double *offsets, double *weights);

/* Takes `steps` steps of exactly `step`, in place. `earlier` is NULL, or an array of the offer's levels - 1 older states, newest
 * first, spaced by `step`; they are left as those of the new time. At nodes with a prescribed value the state is left with the
 * value at the new time. */
int32_t gridassay_advance(double time, double step, int64_t steps, gridassay_state *state, gridassay_state *earlier,
                          const gridassay_harness *harness);

/* Goes on to `until` by steps of its own choice, in place, and writes how many. `tolerance` is 0 where none is asked for. */
int32_t gridassay_march(double time, double until, double tolerance, gridassay_state *state, int64_t *steps,
                        const gridassay_harness *harness);

/* The semi-discrete right-hand side at `time`, source included, into `rate`, which is as large as the state. */
int32_t gridassay_rate(double time, const gridassay_state *state, gridassay_state *rate,
                       const gridassay_harness *harness);

/* The steady solution: the state holds the guess and is left with the solution. Where they are known, writes the iterations taken
 * and what is left of the equations; both may be left as they are. */
int32_t gridassay_solve(gridassay_state *state, int64_t *iterations, double *residual,
                        const gridassay_harness *harness);

/* Text for people about the last call that did not return 0, or NULL. */
const char *gridassay_message(void);

#ifdef __cplusplus
}
#endif

#endif
