/* A library with one fault, named by the macro FAULT: 0 none. */
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

#include "gridassay_scheme.h"

#define NONE 0
#define OTHER_CONTRACT 1
#define NO_CONTRACT 2
#define NO_DESCRIBE 3
#define NULL_TEXT 4
#define NO_JSON 5
#define MISFIT 6
#define SEGFAULT 7
#define EXIT 8
#define STACK 9
#define WRITE_TO_1 10
#define BAD_SIDE 11
#define WRONG_ROOM 12
#define OWN_MESSAGE 13
#define OWN_CODE 14
#define DESCRIBES_CONTRACT_3 15
#define CLOSES_ALL 16

#if FAULT != NO_CONTRACT
int32_t gridassay_contract(void) { return FAULT == OTHER_CONTRACT ? 7 : GRIDASSAY_CONTRACT; }
#endif

#if FAULT != NO_DESCRIBE
const char *gridassay_describe(void) {
    if (FAULT == NULL_TEXT) return NULL;
    if (FAULT == NO_JSON) return "I am a scheme";
    if (FAULT == MISFIT) return "{\"contract\": 1, \"name\": \"faulty\", \"offers\": [{\"equation\": \"advection\"}]}";
    if (FAULT == DESCRIBES_CONTRACT_3) return "{\"contract\": 3}";
    return "{\"contract\": 1, \"name\": \"faulty\", \"offers\": [{\"equation\": \"advection\", \"operations\": [\"advance\"]}]}";
}
#endif

int32_t gridassay_prepare(const gridassay_case *problem, const gridassay_harness *harness) {
    (void)problem, (void)harness;
    return GRIDASSAY_OK;
}

static volatile int depth;
static int deeper(int level) {
    volatile char frame[4096];
    frame[level % 4096] = (char)level;
    depth = level;
    return level < 0 ? 0 : deeper(level + 1) + frame[(level + 1) % 4096];
}

int32_t gridassay_advance(double time, double step, int64_t steps, gridassay_state *state, gridassay_state *earlier,
                          const gridassay_harness *harness) {
    (void)step, (void)steps, (void)earlier;
    double room[4] = {0};
    switch (FAULT) {
    case SEGFAULT: *(volatile double *)8 = 1.0; break;
    case EXIT: exit(4);
    case STACK: return deeper(1);
    case WRITE_TO_1: return write(1, "what a library writes goes to the log\n", 38) == 38 ? GRIDASSAY_OK : GRIDASSAY_FAILED;
    case BAD_SIDE: return harness->boundary(harness->context, time, 9, 0, 1, room, NULL);
    case WRONG_ROOM: return harness->source(harness->context, time, 0, NULL, state->lengths[0] + 5, room);
    case OWN_MESSAGE: return GRIDASSAY_FAILED;
    case OWN_CODE: return 12345;
    case CLOSES_ALL: for (int fd = 0; fd < 1000; ++fd) close(fd); break;
    default: break;
    }
    return GRIDASSAY_OK;
}

#if FAULT == OWN_MESSAGE
const char *gridassay_message(void) { return "the matrix is singular at row 3"; }
#endif
