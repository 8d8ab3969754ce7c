/* fork, pipe and limits are POSIX.
 * NOLINTNEXTLINE(bugprone-reserved-identifier,cert-dcl37-c,cert-dcl51-cpp) */
#define _XOPEN_SOURCE 700

#include "child.h"

#include <errno.h>
#include <signal.h>
#include <stdio.h>
#include <stdlib.h>
#include <sys/resource.h>
#include <sys/wait.h>
#include <unistd.h>

/* Beyond what a run may take: the interpreter's and the BLAS's own growth. */
#define SLACK ((rlim_t)1 << 30)

static void limit(int what, rlim_t most) {
  struct rlimit now;
  if (getrlimit(what, &now) != 0) return;
  if (now.rlim_max != RLIM_INFINITY && most > now.rlim_max) most = now.rlim_max;
  now.rlim_cur = now.rlim_max = most;
  setrlimit(what, &now);
}

#ifndef __SANITIZE_ADDRESS__ /* whose shadow takes terabytes */
/* Bytes of address space in use. A BLAS with many threads takes gigabytes before it is called. */
static rlim_t space_in_use(void) {
  char line[64] = "";
  FILE *file = fopen("/proc/self/statm", "r");
  if (!file) return (rlim_t)8 << 30;
  if (!fgets(line, sizeof line, file)) line[0] = '\0';
  fclose(file);
  return (rlim_t)strtoul(line, NULL, 10) * (rlim_t)sysconf(_SC_PAGESIZE);
}
#endif

static void enter_child(const ef_child_limits *limits) {
  /* The interpreter's handler would only note a Ctrl-C; a child has nothing to tidy up. */
  signal(SIGINT, SIG_DFL);
  signal(SIGTERM, SIG_DFL);
  signal(SIGXCPU, SIG_DFL);
  signal(SIGPIPE, SIG_DFL);
  limit(RLIMIT_CPU, limits->seconds);
  limit(RLIMIT_CORE, 0);
  limit(RLIMIT_FSIZE, 0);
#ifndef __SANITIZE_ADDRESS__
  limit(RLIMIT_AS, space_in_use() + SLACK + limits->memory);
#endif
}

pid_t ef_child_start(const ef_child_limits *limits, int *pipe_end) {
  int ends[2];
  if (pipe(ends) != 0) return -1;
  pid_t child = fork();
  if (child == 0) {
    close(ends[0]);
    *pipe_end = ends[1];
    enter_child(limits);
    return 0;
  }
  close(ends[1]);
  *pipe_end = ends[0];
  if (child < 0) close(ends[0]);
  return child;
}

void ef_child_answer(int pipe_end, const void *bytes, size_t count) {
  const char *at = bytes;
  while (count > 0) {
    ssize_t written = write(pipe_end, at, count);
    if (written < 0 && errno == EINTR) continue;
    if (written <= 0) _exit(1);
    at += written;
    count -= (size_t)written;
  }
  /* Not exit: buffers of the parent's files must not be written twice. */
  _exit(0);
}

size_t ef_child_read(int pipe_end, void *bytes, size_t room) {
  ssize_t got;
  do
    got = read(pipe_end, bytes, room);
  while (got < 0 && errno == EINTR);
  return got > 0 ? (size_t)got : 0;
}

ef_child_end ef_child_finish(pid_t child, int pipe_end) {
  close(pipe_end);
  int status = 0;
  pid_t ended;
  do
    ended = waitpid(child, &status, 0);
  while (ended < 0 && errno == EINTR);
  if (ended != child) return EF_CHILD_CRASHED;
  if (WIFEXITED(status) && WEXITSTATUS(status) == 0) return EF_CHILD_DONE;
  if (!WIFSIGNALED(status)) return EF_CHILD_CRASHED;
  switch (WTERMSIG(status)) {
  case SIGXCPU:
  case SIGKILL: /* what the system sends when SIGXCPU did not help */
    return EF_CHILD_SECONDS;
  case SIGINT:
  case SIGTERM:
    return EF_CHILD_STOPPED;
  default:
    return EF_CHILD_CRASHED;
  }
}
