/* An allocator that fails when told to, and notices writes past its blocks and blocks that are not given back. */
#ifndef FAULTS_H
#define FAULTS_H

#include "thole.h"

typedef struct faults {
    long left;       /* allocations that still succeed; negative: all do */
    bool for_good;   /* once one has failed, so do all later ones */
    long calls;      /* allocations and growths asked for */
    long blocks;     /* given out and not given back */
    bool overwritten; /* a guard was found changed, or a size did not match */
} faults;

/* Memory that asks `f` before each allocation. */
thole_memory faults_memory(faults *f);

#endif
