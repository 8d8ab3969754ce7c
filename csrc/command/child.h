/* Work in a child process with limits of the operating system: what the command puts around a
 * recipe, beyond the limits of the recipe's own Lua state. POSIX. A library inside a host never
 * forks; only who asks for a child gets one. */
#ifndef EF_COMMAND_CHILD_H
#define EF_COMMAND_CHILD_H

#include <stddef.h>
#include <sys/types.h>

typedef struct {
  unsigned seconds; /* of processor time */
  size_t memory;    /* bytes of address space beyond what is in use, and 1 GiB */
} ef_child_limits;

typedef enum {
  EF_CHILD_DONE,    /* the child ended by itself */
  EF_CHILD_SECONDS, /* its processor time was used up */
  EF_CHILD_STOPPED, /* interrupted from the keyboard, or told to end */
  EF_CHILD_CRASHED  /* anything else */
} ef_child_end;

/* Starts a child. Returns 0 in the child, with *pipe to write the answer to, limits set (no file
 * can be written, signals as by default); the child's process number in the parent, with *pipe to
 * read from; -1 when there is none. */
pid_t ef_child_start(const ef_child_limits *limits, int *pipe);

/* In the child: writes the answer and ends the process without returning. */
_Noreturn void ef_child_answer(int pipe, const void *bytes, size_t count);

/* In the parent: reads at most `room` bytes; 0 at the end. */
size_t ef_child_read(int pipe, void *bytes, size_t room);

/* In the parent: closes the pipe, waits for the child and says how it ended. */
ef_child_end ef_child_finish(pid_t child, int pipe);

#endif
