/* Seeded networks of known shapes for benches. */
#ifndef SHAPES_H
#define SHAPES_H

#include "thole.h"

typedef enum shape_kind {
    SHAPE_TIMETABLE, /* random links between near neighbours on a ring, one in twenty long; a link stays with probability 1 - turnover */
    SHAPE_CONTACTS,  /* people in changing groups: cliques everywhere */
    SHAPE_STAR,      /* all links from one hub */
    SHAPE_PATH,      /* a path whose links come and go */
    SHAPE_RING,      /* one giant ring whose links come and go */
    SHAPE_ISLANDS,   /* many small islands of four places */
    SHAPE_FLICKER,   /* timetable whose links all change every window */
    SHAPE_STILL      /* timetable whose links never change */
} shape_kind;

typedef struct shape {
    shape_kind kind;
    uint32_t nodes;
    uint32_t windows;
    uint32_t links; /* at a time */
    double turnover; /* share of the links that are replaced from one window to the next */
} shape;

/* The network of a shape and its windows of ten units each; the caller releases both. Ends the program when memory is refused. */
void shape_make(thole_context *context, const shape *shape, thole_network **network, thole_windows **windows);

#endif
