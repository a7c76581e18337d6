/* How much memory the machine, or the group the process runs in, has. */
#include <stdio.h>
#include <unistd.h>

#include "base/base.h"

static size_t read_limit(const char *path) {
    FILE *file = fopen(path, "r");
    if (file == NULL)
        return 0;
    size_t value = 0;
    int c;
    while ((c = getc(file)) >= '0' && c <= '9' && value < SIZE_MAX / 10 - 10)
        value = value * 10 + (size_t)(c - '0');
    fclose(file);
    return value; /* "max" gives 0: no limit */
}

size_t thole_machine_memory(void) {
    long pages = sysconf(_SC_PHYS_PAGES), page = sysconf(_SC_PAGESIZE);
    size_t machine = pages > 0 && page > 0 ? (size_t)pages * (size_t)page : 0;
    static const char *const groups[] = {"/sys/fs/cgroup/memory.max", "/sys/fs/cgroup/memory/memory.limit_in_bytes"};
    for (size_t i = 0; i < 2; i++) {
        size_t limit = read_limit(groups[i]);
        if (limit != 0 && (machine == 0 || limit < machine))
            machine = limit;
    }
    return machine;
}
