#include "pattern.h"

#include <ctype.h>
#include <string.h>

enum { MOST_DEPTH = 200 };

static const char *refuse(efl_pattern *self, const char *problem) {
  if (!self->problem) self->problem = problem;
  return NULL;
}

/* Counts steps; false when there are none left. */
static int spend(efl_pattern *self, uint64_t steps) {
  self->steps += steps;
  if (self->steps <= self->most_steps) return 1;
  refuse(self, "the pattern takes too many steps on this text");
  return 0;
}

static int in_class(int c, int letter) {
  int found;
  switch (tolower(letter)) {
  case 'a':
    found = isalpha(c);
    break;
  case 'c':
    found = iscntrl(c);
    break;
  case 'd':
    found = isdigit(c);
    break;
  case 'g':
    found = isgraph(c);
    break;
  case 'l':
    found = islower(c);
    break;
  case 'p':
    found = ispunct(c);
    break;
  case 's':
    found = isspace(c);
    break;
  case 'u':
    found = isupper(c);
    break;
  case 'w':
    found = isalnum(c);
    break;
  case 'x':
    found = isxdigit(c);
    break;
  case 'z': /* of Lua 5.1, still understood */
    found = c == 0;
    break;
  default:
    return letter == c;
  }
  return islower(letter) ? found != 0 : !found;
}

/* Behind the single-character item at p, or NULL when it is malformed. The byte at pattern_end may
 * be read: a Lua text ends with a zero. */
static const char *item_end(efl_pattern *self, const char *p) {
  if (*p == '%') {
    if (p + 1 == self->pattern_end) return refuse(self, "malformed pattern (ends with '%')");
    return p + 2;
  }
  if (*p++ != '[') return p;
  if (*p == '^') p++;
  do {
    if (p == self->pattern_end) return refuse(self, "malformed pattern (missing ']')");
    if (*p++ == '%' && p < self->pattern_end) p++;
  } while (*p != ']');
  return p + 1;
}

/* p at "[", close at its "]". */
static int in_set(int c, const char *p, const char *close) {
  int inside = 1;
  if (p[1] == '^') {
    inside = 0;
    p++;
  }
  while (++p < close) {
    if (*p == '%') {
      if (in_class(c, (unsigned char)*++p)) return inside;
    } else if (p[1] == '-' && p + 2 < close) {
      p += 2;
      if ((unsigned char)p[-2] <= c && c <= (unsigned char)*p) return inside;
    } else if ((unsigned char)*p == c) {
      return inside;
    }
  }
  return !inside;
}

/* Whether the character at s is the item from p to end. A set costs as many steps as it is long. */
static int fits(efl_pattern *self, const char *s, const char *p, const char *end) {
  if (!spend(self, (uint64_t)(end - p)) || s >= self->subject_end) return 0;
  int c = (unsigned char)*s;
  switch (*p) {
  case '.':
    return 1;
  case '%':
    return in_class(c, (unsigned char)p[1]);
  case '[':
    return in_set(c, p, end - 1);
  default:
    return (unsigned char)*p == c;
  }
}

/* Recursion down to MOST_DEPTH, counted in match(). NOLINTBEGIN(misc-no-recursion) */
static const char *match(efl_pattern *self, const char *s, const char *p);

static const char *longest(efl_pattern *self, const char *s, const char *p, const char *end) {
  ptrdiff_t count = 0;
  while (fits(self, s + count, p, end))
    count++;
  for (; count >= 0 && !self->problem; count--) {
    const char *result = match(self, s + count, end + 1);
    if (result) return result;
  }
  return NULL;
}

static const char *shortest(efl_pattern *self, const char *s, const char *p, const char *end) {
  for (;;) {
    const char *result = match(self, s, end + 1);
    if (result || self->problem) return result;
    if (!fits(self, s, p, end)) return NULL;
    s++;
  }
}

static const char *open_capture(efl_pattern *self, const char *s, const char *p, ptrdiff_t size) {
  if (self->captures >= EFL_MOST_CAPTURES) return refuse(self, "too many captures");
  self->capture[self->captures++] = (efl_capture){s, size};
  const char *result = match(self, s, p);
  if (!result) self->captures--;
  return result;
}

static const char *close_capture(efl_pattern *self, const char *s, const char *p) {
  int i = self->captures - 1;
  while (i >= 0 && self->capture[i].size != EFL_UNFINISHED)
    i--;
  if (i < 0) return refuse(self, "invalid pattern capture");
  self->capture[i].size = s - self->capture[i].start;
  const char *result = match(self, s, p);
  if (!result) self->capture[i].size = EFL_UNFINISHED;
  return result;
}

/* Behind the text of an earlier capture found again at s, or NULL. */
static const char *again(efl_pattern *self, const char *s, int digit) {
  int i = digit - '1';
  if (i < 0 || i >= self->captures || self->capture[i].size == EFL_UNFINISHED)
    return refuse(self, "invalid capture index in a pattern");
  ptrdiff_t size = self->capture[i].size;
  if (size < 0 || size > self->subject_end - s || !spend(self, (uint64_t)size)) return NULL;
  return memcmp(self->capture[i].start, s, (size_t)size) == 0 ? s + size : NULL;
}

/* Behind the balanced text at s for "%bxy", p at x; or NULL. */
static const char *balanced(efl_pattern *self, const char *s, const char *p) {
  if (self->pattern_end - p < 2)
    return refuse(self, "malformed pattern (missing arguments to '%b')");
  if (s >= self->subject_end || *s != *p) return NULL;
  int open = 1;
  while (++s < self->subject_end && spend(self, 1)) {
    if (*s == p[1]) {
      if (--open == 0) return s + 1;
    } else if (*s == p[0]) {
      open++;
    }
  }
  return NULL;
}

/* Whether s is a frontier of the set from p to end. */
static int at_frontier(efl_pattern *self, const char *s, const char *p, const char *end) {
  int before = s == self->subject ? 0 : (unsigned char)s[-1];
  int here = s == self->subject_end ? 0 : (unsigned char)*s;
  return spend(self, (uint64_t)(end - p)) && !in_set(before, p, end - 1) &&
         in_set(here, p, end - 1);
}

/* One single-character item with its repetition. Moves *s and *p on and returns 1 to go on there,
 * or returns 0 with the final answer in *s. */
static int take_item(efl_pattern *self, const char **s, const char **p) {
  const char *end = item_end(self, *p), *result;
  if (!end) {
    *s = NULL;
    return 0;
  }
  switch (*end) {
  case '?':
    if (fits(self, *s, *p, end) && (result = match(self, *s + 1, end + 1))) {
      *s = result;
      return 0;
    }
    *p = end + 1;
    return 1;
  case '+':
    *s = fits(self, *s, *p, end) ? longest(self, *s + 1, *p, end) : NULL;
    return 0;
  case '*':
    *s = longest(self, *s, *p, end);
    return 0;
  case '-':
    *s = shortest(self, *s, *p, end);
    return 0;
  default:
    if (!fits(self, *s, *p, end)) {
      *s = NULL;
      return 0;
    }
    ++*s;
    *p = end;
    return 1;
  }
}

/* An item that begins with "%" and is no class. Answers as take_item; -1: it is a class after all.
 */
static int take_special(efl_pattern *self, const char **s, const char **p) {
  if (*p + 1 == self->pattern_end) return -1;
  int letter = (unsigned char)(*p)[1];
  if (letter == 'b') {
    *s = balanced(self, *s, *p + 2);
    *p += 4;
  } else if (letter == 'f') {
    const char *set = *p + 2, *end = NULL;
    if (*set != '[')
      refuse(self, "missing '[' after '%f' in pattern");
    else
      end = item_end(self, set);
    if (!end || !at_frontier(self, *s, set, end)) *s = NULL;
    *p = end;
  } else if (isdigit(letter)) {
    *s = again(self, *s, letter);
    *p += 2;
  } else {
    return -1;
  }
  return *s != NULL;
}

static const char *match_here(efl_pattern *self, const char *s, const char *p) {
  while (p != self->pattern_end && !self->problem && spend(self, 1)) {
    if (*p == '(') {
      int position = p[1] == ')';
      return open_capture(self, s, p + 1 + position, position ? EFL_POSITION : EFL_UNFINISHED);
    }
    if (*p == ')') return close_capture(self, s, p + 1);
    if (*p == '$' && p + 1 == self->pattern_end) return s == self->subject_end ? s : NULL;
    int going = *p == '%' ? take_special(self, &s, &p) : -1;
    if (going < 0) going = take_item(self, &s, &p);
    if (!going) return s;
  }
  return self->problem ? NULL : s;
}

static const char *match(efl_pattern *self, const char *s, const char *p) {
  if (self->depth == 0) return refuse(self, "pattern too complex");
  self->depth--;
  const char *result = match_here(self, s, p);
  self->depth++;
  return result;
}

/* NOLINTEND(misc-no-recursion) */

const char *efl_pattern_match(efl_pattern *self, const char *at, const char *pattern) {
  self->captures = 0;
  self->depth = MOST_DEPTH;
  const char *result = match(self, at, pattern);
  return self->problem ? NULL : result;
}

const char *efl_pattern_find_plain(efl_pattern *self, const char *at, const char *text,
                                   size_t size) {
  if (size == 0) return at;
  while ((size_t)(self->subject_end - at) >= size) {
    size_t room = (size_t)(self->subject_end - at) - size + 1;
    const char *first = memchr(at, *text, room);
    if (!spend(self, (first ? (uint64_t)(first - at) : room) / 16 + 1) || !first) return NULL;
    size_t same = 1;
    while (same < size && first[same] == text[same])
      same++;
    if (!spend(self, same)) return NULL;
    if (same == size) return first;
    at = first + 1;
  }
  return NULL;
}
