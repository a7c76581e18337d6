/* Inside the core: how much is coming. */
#ifndef TN_EXPECT_H
#define TN_EXPECT_H

#include "network/network.h"

/* About as many events will come in all: room for them is made at once, which is cheaper than growing. Too
 * many is given back at the end; too few, or a refusal, does no harm. */
void tn_builder_expect(thole_builder *builder, size_t events);

#endif
