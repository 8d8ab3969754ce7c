/* Lua's patterns (Lua 5.4 reference manual, 6.4.1), matched by a machine that counts its steps: a
 * backtracking pattern takes exponential time on the wrong text, and one call into C can't be
 * stopped from outside. Knows nothing of a Lua state. */
#ifndef EF_LUA_PATTERN_H
#define EF_LUA_PATTERN_H

#include <stddef.h>
#include <stdint.h>

enum { EFL_MOST_CAPTURES = 32, EFL_UNFINISHED = -1, EFL_POSITION = -2 };

typedef struct {
  const char *start;
  ptrdiff_t size; /* or EFL_UNFINISHED, EFL_POSITION */
} efl_capture;

typedef struct {
  const char *subject, *subject_end;
  const char *pattern_end;
  uint64_t steps, most_steps; /* characters tried; the caller sets both */
  int depth;
  int captures;
  efl_capture capture[EFL_MOST_CAPTURES];
  const char *problem; /* why the pattern or its work was refused, else NULL */
} efl_pattern;

/* Matches the pattern from `pattern` to pattern_end at `at` exactly (an anchor "^" is the
 * caller's). Returns the end of the match, or NULL: no match, or `problem` is set. */
const char *efl_pattern_match(efl_pattern *self, const char *at, const char *pattern);

/* First place of a plain text at or after `at`, or NULL; counts steps too. */
const char *efl_pattern_find_plain(efl_pattern *self, const char *at, const char *text,
                                   size_t size);

#endif
