/* SHA-256 (FIPS 180-4), for naming texts in a record. */
#ifndef EF_NUM_SHA256_H
#define EF_NUM_SHA256_H

#include <stddef.h>

#define EF_SHA256_SIZE 32

/* The digest of `size` bytes at `data` (may be NULL when size is 0). Cannot fail. */
void ef_sha256(const void *data, size_t size, unsigned char digest[EF_SHA256_SIZE]);

#endif
