/* The context that every solver of the core receives: memory, limits, progress and the message of
 * the last failure. There is no other state: no globals, no errno, no printing. */
#ifndef EF_NUM_CONTEXT_H
#define EF_NUM_CONTEXT_H

#include <stddef.h>

/* mu0 in H/m. Exactly 4 pi 1e-7 by choice: CODATA 2022 differs by about 1.3e-10 relative. */
#define EF_MU0 1.25663706143591729538505735331180e-6
#define EF_PI  3.14159265358979323846264338327950

typedef enum {
  EF_OK = 0,
  EF_BAD_VALUE,     /* an argument is not finite, out of its allowed range or inconsistent */
  EF_OUT_OF_RANGE,  /* a question beyond the data, e.g. a temperature outside the curves */
  EF_NO_MEMORY,     /* the allocator returned NULL */
  EF_NOT_CONVERGED, /* an iteration ended without meeting its tolerance; no result is written */
  EF_SINGULAR,      /* a system of equations has no unique solution */
  EF_CANCELLED      /* the progress callback asked to stop */
} ef_status;

/* The one door for memory. resize(user, NULL, 0, n) allocates n bytes, resize(user, p, old, 0)
 * frees and returns NULL, otherwise the block is resized. NULL for n > 0 means no memory. */
typedef struct {
  void *(*resize)(void *user, void *block, size_t old_size, size_t new_size);
  void *user;
} ef_allocator;

#define EF_MESSAGE_SIZE 320
#define EF_FIELD_SIZE   64
#define EF_ALLOWED_SIZE 128

typedef struct ef_context {
  ef_allocator allocator;
  double tolerance;   /* relative residual at which nonlinear solvers stop; default 1e-12 */
  int max_iterations; /* of one nonlinear solve; default 200 */
  int threads;        /* for solvers that use several; default 1 */
  /* Called on the calling thread between iterations of long work with the share done (0..1).
   * Non-zero cancels. NULL: not called. */
  int (*progress)(void *user, double share);
  void *progress_user;
  /* Filled by ef_fail, empty after a success. */
  char field[EF_FIELD_SIZE];
  double value;
  char allowed[EF_ALLOWED_SIZE];
  char message[EF_MESSAGE_SIZE];
} ef_context;

/* Sets the defaults: the C library's allocator, tolerance 1e-12, 200 iterations, 1 thread. */
void ef_context_init(ef_context *context);

/* Records a failure and returns `status`. field: the quantity's name; value: what it was;
 * allowed: what would do. The message reads "FIELD is VALUE; allowed: ALLOWED". */
ef_status ef_fail(ef_context *context, ef_status status, const char *field, double value,
                  const char *allowed);

/* Records a failure that is not about one value; the message is `message` itself. */
ef_status ef_fail_message(ef_context *context, ef_status status, const char *field,
                          const char *message);

/* EF_OK, or EF_BAD_VALUE with the field named when value is not finite and > 0. */
ef_status ef_require_positive(ef_context *context, const char *field, double value);

/* The short name of a status for machines, e.g. "bad_value". Never NULL. */
const char *ef_status_name(ef_status status);

/* Zeroed memory of count * size bytes, or NULL (message set) when it overflows or is refused. */
void *ef_allocate(ef_context *context, size_t count, size_t size);

/* Frees what ef_allocate gave, with the same count and size. NULL is allowed. */
void ef_release(ef_context *context, void *block, size_t count, size_t size);

#endif
