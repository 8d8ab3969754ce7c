/* Limits of an isolated Lua state: memory, steps and processor time, watched by its allocator and
 * by a count hook. A step is one instruction of Lua's machine, or about as much work in a C
 * function. */
#ifndef EF_LUA_LIMITS_H
#define EF_LUA_LIMITS_H

#include <stdint.h>
#include <lua.h>

typedef enum { EFL_WITHIN, EFL_STEPS, EFL_SECONDS } efl_exceeded;

typedef struct {
  lua_Alloc parent; /* the creating state's allocator, where all memory comes from */
  void *parent_user;
  lua_State *state;  /* the watched state, NULL until it is there */
  size_t used, most; /* bytes */
  size_t longest;    /* bytes of one text */
  uint64_t steps, most_steps;
  int interval; /* instructions between two calls of the hook */
  double most_seconds;
  double started;        /* processor time of the process, s */
  efl_exceeded exceeded; /* what ran out; nothing gives it back */
  int refused;           /* memory was refused at least once */
} efl_limits;

/* The allocator of a limited state; `user` is its efl_limits. */
void *efl_limited_resize(void *user, void *block, size_t old_size, size_t new_size);

/* The limits of the state that L belongs to, or NULL when it has none. */
efl_limits *efl_limits_of(lua_State *L);

/* Watches a state that was created with efl_limited_resize. From the moment when a limit is reached
 * every further instruction raises, so that no pcall can hold the error back. */
void efl_limits_watch(efl_limits *limits, lua_State *state);

/* Processor time is used up: notes it, and returns 1. */
int efl_limits_late(efl_limits *limits);

/* Counts work of a C function and raises when a limit is reached. Without limits nothing happens.
 */
void efl_charge(lua_State *L, uint64_t steps);

/* Steps left, UINT64_MAX without limits. */
uint64_t efl_steps_left(lua_State *L);

#endif
