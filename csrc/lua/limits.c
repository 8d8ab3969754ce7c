#include "limits.h"

#include <time.h>

enum {
  INTERVAL = 1000,     /* instructions between two looks at the clock */
  SHORT_INTERVAL = 50, /* once a long text is there, which one instruction may take 10 ms to read */
  LONG_TEXT = 1024 * 1024, /* bytes */
  LARGE_BLOCK = 64 * 1024 /* bytes; so much is filled in less time than a look at the clock costs */
};

static double processor_time(void) {
  return (double)clock() / CLOCKS_PER_SEC;
}

static void tick(lua_State *L, lua_Debug *record);

/* From now on each instruction calls the hook. Setting a hook is allowed at any time. */
static void exhaust(efl_limits *limits, efl_exceeded what) {
  if (limits->exceeded == EFL_WITHIN) limits->exceeded = what;
  if (limits->state) lua_sethook(limits->state, tick, LUA_MASKCOUNT, 1);
}

int efl_limits_late(efl_limits *limits) {
  if (!limits->state) return 0;
  if (processor_time() - limits->started <= limits->most_seconds) return 0;
  exhaust(limits, EFL_SECONDS);
  return 1;
}

static void check(lua_State *L, efl_limits *limits) {
  if (limits->steps > limits->most_steps)
    exhaust(limits, EFL_STEPS);
  else
    efl_limits_late(limits);
  if (limits->exceeded == EFL_WITHIN) return;
  lua_pushliteral(L, "a limit of this run is reached");
  lua_error(L);
}

static void tick(lua_State *L, lua_Debug *record) {
  (void)record;
  efl_limits *limits = efl_limits_of(L);
  if (limits->exceeded == EFL_WITHIN) limits->steps += (uint64_t)limits->interval;
  check(L, limits);
}

static void watch_closely(efl_limits *limits) {
  if (!limits->state || limits->exceeded != EFL_WITHIN || limits->interval == SHORT_INTERVAL)
    return;
  limits->interval = SHORT_INTERVAL;
  lua_sethook(limits->state, tick, LUA_MASKCOUNT, SHORT_INTERVAL);
}

void *efl_limited_resize(void *user, void *block, size_t old_size, size_t new_size) {
  efl_limits *limits = user;
  /* Without a block Lua gives the kind of the new object in old_size. */
  size_t held = block ? old_size : 0;
  if (new_size > held) {
    size_t more = new_size - held;
    int too_long = !block && old_size == LUA_TSTRING && new_size > limits->longest;
    int late = more >= LARGE_BLOCK && efl_limits_late(limits);
    if (late || too_long || limits->used > limits->most || more > limits->most - limits->used) {
      /* Lua now collects all its garbage, which takes time in proportion to what it holds. */
      limits->steps += limits->used / 64;
      limits->refused = 1;
      efl_limits_late(limits);
      return NULL;
    }
    limits->steps += more / 64;
    if (!block && old_size == LUA_TSTRING && new_size > LONG_TEXT) watch_closely(limits);
  }
  void *result = limits->parent(limits->parent_user, block, old_size, new_size);
  if (result || new_size == 0) limits->used = limits->used - held + new_size;
  return result;
}

efl_limits *efl_limits_of(lua_State *L) {
  void *user = NULL;
  return lua_getallocf(L, &user) == efl_limited_resize ? user : NULL;
}

void efl_limits_watch(efl_limits *limits, lua_State *state) {
  limits->state = state;
  limits->started = processor_time();
  limits->interval = INTERVAL;
  lua_sethook(state, tick, LUA_MASKCOUNT, INTERVAL);
}

void efl_charge(lua_State *L, uint64_t steps) {
  efl_limits *limits = efl_limits_of(L);
  if (!limits) return;
  limits->steps += steps;
  if (steps >= INTERVAL) check(L, limits);
}

uint64_t efl_steps_left(lua_State *L) {
  const efl_limits *limits = efl_limits_of(L);
  if (!limits) return UINT64_MAX;
  return limits->steps < limits->most_steps ? limits->most_steps - limits->steps : 0;
}
