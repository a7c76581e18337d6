/* Random cases for the judge, of shapes that make bars of every kind and dimension. */
#ifndef RANDOM_CASE_H
#define RANDOM_CASE_H

#include "support/dice.h"
#include "support/judge.h"

/* Fill in everything: 3 to 9 nodes, 1 to 8 windows of any arrangement, events that last, return and repeat,
 * contacts, now and then a self-loop. Links alone by themselves seldom bound a void, so that most cases draw
 * from a graph that has one (cycles, bipartite and multipartite graphs, suspensions), whose links come and
 * go. */
void random_case(dice *d, judge_case *c);

/* Leave out events, windows and dimensions for as long as `fails` stays true. */
void random_case_shrink(judge_case *c, bool (*fails)(const judge_case *c, void *user), void *user);

#endif
