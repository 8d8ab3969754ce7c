/* core.read_below(folder, path, most) -> text, or nil and a sentence: reads a regular file below a
 * folder without following a link or leaving it, whatever changes on the disk meanwhile. */
/* openat and O_NOFOLLOW are POSIX.
 * NOLINTNEXTLINE(bugprone-reserved-identifier,cert-dcl37-c,cert-dcl51-cpp) */
#define _POSIX_C_SOURCE 200809L

#include <fcntl.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

#include "binding.h"

enum { LONGEST_NAME = 255 };

/* Opens `name` in an open folder and closes that folder. */
static int step(int folder, const char *name, size_t size, int flags) {
  char part[LONGEST_NAME + 1];
  int next = -1;
  /* A part that begins with "." is hidden, or leads up. */
  if (size > 0 && size <= LONGEST_NAME && *name != '.') {
    memcpy(part, name, size);
    part[size] = '\0';
    next = openat(folder, part, O_RDONLY | O_NOFOLLOW | O_CLOEXEC | O_NONBLOCK | flags);
  }
  close(folder);
  return next;
}

/* A descriptor of the file, or -1. */
static int open_below(const char *folder, const char *path) {
  int at = open(folder, O_RDONLY | O_DIRECTORY | O_CLOEXEC);
  while (at >= 0) {
    const char *slash = strchr(path, '/');
    if (!slash) return step(at, path, strlen(path), 0);
    at = step(at, path, (size_t)(slash - path), O_DIRECTORY);
    path = slash + 1;
  }
  return -1;
}

static int fail(lua_State *L, const char *why) {
  lua_pushnil(L);
  lua_pushstring(L, why);
  return 2;
}

static int read_below(lua_State *L) {
  size_t length;
  const char *folder = luaL_checkstring(L, 1), *path = luaL_checklstring(L, 2, &length);
  lua_Integer most = luaL_checkinteger(L, 3);
  if (strlen(path) != length) return fail(L, "its name holds a zero byte");
  /* The room for the file comes first, so that nothing raises while it is open. */
  struct stat status;
  int file = open_below(folder, path);
  int regular = file >= 0 && fstat(file, &status) == 0 && S_ISREG(status.st_mode);
  if (file >= 0) close(file);
  if (!regular) return fail(L, "there is no such plain file (links and hidden files are not read)");
  if (most < 0 || status.st_size > most) return fail(L, "it is too large");
  size_t room = (size_t)status.st_size, count = 0;
  char *text = lua_newuserdatauv(L, room + 1, 0);
  file = open_below(folder, path);
  ssize_t got = file >= 0 ? 1 : -1;
  while (got > 0 && count < room) {
    got = read(file, text + count, room - count);
    if (got > 0) count += (size_t)got;
  }
  if (file >= 0) close(file);
  if (got < 0) return fail(L, "it can't be read");
  lua_pushlstring(L, text, count);
  return 1;
}

void efl_open_read_below(lua_State *L) {
  lua_pushcfunction(L, read_below);
  lua_setfield(L, -2, "read_below");
}
