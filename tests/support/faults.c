#include "support/faults.h"

#include <stdlib.h>
#include <string.h>

enum { GUARD = 16, PATTERN = 0xA5 };

/* A block: its size, guard, bytes, guard. */
static unsigned char *base_of(void *block) { return (unsigned char *)block - GUARD - sizeof(size_t); }

static bool intact(unsigned char *base, size_t bytes) {
    size_t size;
    memcpy(&size, base, sizeof size);
    if (size != bytes)
        return false;
    for (size_t i = 0; i < GUARD; i++)
        if (base[sizeof size + i] != PATTERN || base[sizeof size + GUARD + bytes + i] != PATTERN)
            return false;
    return true;
}

static void *resize(void *user, void *block, size_t old_bytes, size_t new_bytes) {
    faults *f = user;
    if (block != NULL && !intact(base_of(block), old_bytes))
        f->overwritten = true;
    if (new_bytes > old_bytes) {
        f->calls++;
        if (f->left == 0) {
            f->left = f->for_good ? 0 : -1;
            return NULL;
        }
        f->left -= f->left > 0;
    }
    unsigned char *fresh = NULL;
    if (new_bytes > 0) {
        fresh = malloc(new_bytes + 2 * GUARD + sizeof(size_t));
        if (fresh == NULL)
            return NULL;
        memcpy(fresh, &new_bytes, sizeof new_bytes);
        memset(fresh + sizeof(size_t), PATTERN, GUARD);
        memset(fresh + sizeof(size_t) + GUARD + new_bytes, PATTERN, GUARD);
        fresh += sizeof(size_t) + GUARD;
        memset(fresh, 0xCD, new_bytes);
        if (block != NULL)
            memcpy(fresh, block, old_bytes < new_bytes ? old_bytes : new_bytes);
        f->blocks++;
    }
    if (block != NULL) {
        memset(block, 0xDD, old_bytes);
        free(base_of(block));
        f->blocks--;
    }
    return fresh;
}

thole_memory faults_memory(faults *f) { return (thole_memory){.resize = resize, .user = f}; }
