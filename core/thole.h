/* Thole: when a network that changes through time holds together, when it falls
 * apart, and which loops it has for how long.
 *
 * The public C interface, a header a room, in the order of the flow: text becomes
 * a network, windows cut it, the zigzag gives its barcode. base/base.h states
 * the rules of ownership and errors that hold throughout.
 *
 *     thole_memory memory = {0};
 *     thole_context context = {.memory = &memory, .threads = 1};
 *     thole_contacts_options columns = {.from = {"from", 0}, .to = {"to", 0},
 *                                       .start = {"start", 0}, .finish = {"finish", 0}};
 *     thole_network *network = NULL;
 *     thole_error error;
 *     if (thole_read_contacts(&context, "week.csv", &columns, &network, &error) != THOLE_OK)
 *         fprintf(stderr, "%s\n", error.text);
 */
#ifndef THOLE_H
#define THOLE_H

#include "base/base.h"
#include "clock/clock.h"
#include "network/network.h"
#include "network/filter.h"
#include "network/windows.h"
#include "ingest/contacts.h"
#include "complex/complex.h"
#include "zigzag/zigzag.h"
#include "zigzag/choose.h"
#include "zigzag/carriers.h"

#endif
