/* How fast barcodes are computed, how that grows, and in how much memory, on seeded networks of many shapes.
 *
 *     bench_zigzag [FILE]
 *
 * The reference of the same run is the rank computation of a single window by M4RI (boundary matrices of
 * dimensions 1 and 2, dense), summed over a sample of windows and scaled to all of them: what it takes to
 * know the Betti numbers of each window by itself, without what connects them. Times are the best of three;
 * exponents are fitted by least squares on logarithms. The table is written to FILE too, as comma-separated
 * values; without one, beside the program, as bench_zigzag.csv. */
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <sys/resource.h>
#include <time.h>

#include "bench/shapes.h"
#include "support/flat_complex.h"

static FILE *csv;

static double seconds(void) {
    struct timespec t;
    clock_gettime(CLOCK_MONOTONIC, &t);
    return (double)t.tv_sec + 1e-9 * (double)t.tv_nsec;
}

typedef struct figures {
    double cells, seconds, peak, reference;
    size_t bars, blocks;
} figures;

static int by_link(const void *a, const void *b) {
    const int *x = a, *y = b;
    return x[0] != y[0] ? (x[0] > y[0]) - (x[0] < y[0]) : (x[1] > y[1]) - (x[1] < y[1]);
}

/* Seconds that M4RI takes for the ranks of all windows, from `samples` of them. */
static double rank_seconds(const thole_network *network, const thole_windows *windows, size_t samples) {
    size_t n = thole_windows_count(windows), events = thole_network_count(network), looked = 0;
    int *end = malloc(sizeof *end * 2 * (events + 1));
    double spent = 0;
    for (size_t k = 0; k < samples && k < n; k++) {
        size_t w = n * (2 * k + 1) / (2 * samples), m = 0, kept = 0;
        for (size_t i = 0; i < events; i++) {
            thole_event e = thole_network_event(network, i);
            if (e.start < thole_windows_finish(windows, w) && e.finish > thole_windows_start(windows, w) &&
                e.from != e.to) {
                end[2 * m] = (int)(e.from < e.to ? e.from : e.to);
                end[2 * m + 1] = (int)(e.from < e.to ? e.to : e.from);
                m++;
            }
        }
        qsort(end, m, 2 * sizeof *end, by_link);
        for (size_t i = 0; i < m; i++)
            if (i == 0 || by_link(&end[2 * i], &end[2 * (kept - 1)]) != 0) {
                end[2 * kept] = end[2 * i];
                end[2 * kept + 1] = end[2 * i + 1];
                kept++;
            }
        flat_graph graph = {(int)thole_network_nodes(network), kept, end};
        size_t betti[2];
        double began = seconds();
        flat_betti(&graph, 1, betti);
        spent += seconds() - began;
        looked++;
    }
    free(end);
    return looked == 0 ? 0 : spent * (double)n / (double)looked;
}

static figures measure(const shape *s, thole_radius kind, uint32_t radius, uint32_t dims, int threads,
                       size_t samples) {
    thole_memory memory = {0};
    thole_context context = {.memory = &memory, .threads = threads};
    thole_network *network;
    thole_windows *windows;
    thole_error error;
    shape_make(&context, s, &network, &windows);
    figures f = {.seconds = 1e300};
    for (int run = 0; run < 3; run++) {
        thole_zigzag_options options = {.radius_kind = kind, .radius = radius, .dims = dims};
        thole_barcode *barcode;
        double began = seconds();
        if (thole_zigzag(&context, network, windows, &options, &barcode, &error) != THOLE_OK) {
            fprintf(stderr, "%s\n", error.text);
            exit(1);
        }
        double took = seconds() - began;
        f.seconds = took < f.seconds ? took : f.seconds;
        const thole_zigzag_counts *counts = thole_barcode_counts(barcode);
        f.cells = 0;
        for (int d = 0; d < THOLE_MOST_DIMENSION + 2; d++)
            f.cells += (double)counts->cells[d];
        f.peak = (double)counts->peak_bytes;
        f.blocks = (size_t)counts->blocks;
        f.bars = thole_barcode_count(barcode);
        thole_barcode_release(barcode);
    }
    f.reference = samples > 0 ? rank_seconds(network, windows, samples) : 0;
    thole_network_release(network);
    thole_windows_release(windows);
    return f;
}

static void row(const char *name, const char *radius, const shape *s, int threads, const figures *f,
                double exponent) {
    char grows[16] = "", ratio[16] = "";
    if (!isnan(exponent))
        snprintf(grows, sizeof grows, "%.2f", exponent);
    if (f->reference > 0)
        snprintf(ratio, sizeof ratio, "%.0f", f->reference / f->seconds);
    printf("%-24s %-6s %7u %7u %7d %10.0f %8.3f %8.2f %8.1f %8s %9s\n", name, radius, (unsigned)s->windows,
           (unsigned)s->links, threads, f->cells, f->seconds, f->cells / f->seconds / 1e6, f->peak / f->cells,
           grows, ratio);
    fprintf(csv, "%s,%s,%u,%u,%d,%.0f,%.6f,%.0f,%.1f,%s,%s\n", name, radius, (unsigned)s->windows,
            (unsigned)s->links, threads, f->cells, f->seconds, f->cells / f->seconds, f->peak / f->cells,
            grows, ratio);
    fflush(stdout);
}

/* The exponent of seconds against size over a series. */
static double slope(const double *size, const double *took, size_t n) {
    double sx = 0, sy = 0, sxx = 0, sxy = 0, m = (double)n;
    for (size_t i = 0; i < n; i++) {
        double x = log(size[i]), y = log(took[i]);
        sx += x, sy += y, sxx += x * x, sxy += x * y;
    }
    return (m * sxy - sx * sy) / (m * sxx - sx * sx);
}

/* Twice the windows, and so on: the last row has the exponent. */
static void growth_in_windows(thole_radius kind, const char *radius) {
    static const uint32_t windows[] = {125, 250, 500, 1000, 2000};
    double size[5], took[5];
    for (size_t i = 0; i < 5; i++) {
        shape s = {SHAPE_TIMETABLE, 2500, windows[i], 1500, 0.3};
        figures f = measure(&s, kind, 1, 3, 1, i == 0 && kind == THOLE_RADIUS_HOPS ? 5 : 0);
        size[i] = windows[i];
        took[i] = f.seconds;
        row("timetable, windows", radius, &s, 1, &f, i == 4 ? slope(size, took, 5) : (double)NAN);
    }
}

static void growth_in_links(void) {
    static const uint32_t links[] = {100, 1000, 10000, 100000};
    double size[4], took[4];
    for (size_t i = 0; i < 4; i++) {
        shape s = {SHAPE_TIMETABLE, links[i] * 5 / 3, 60, links[i], 0.3};
        figures f = measure(&s, THOLE_RADIUS_HOPS, 1, 3, 1, 0);
        size[i] = links[i];
        took[i] = f.seconds;
        row("timetable, links", "1", &s, 1, &f, i == 3 ? slope(size, took, 4) : (double)NAN);
    }
}

int main(int n, char **argument) {
    char beside[4096];
    const char *path = n > 1 ? argument[1] : beside;
    int length = snprintf(beside, sizeof beside, "%s.csv", argument[0]);
    csv = length > 0 && (size_t)length < sizeof beside ? fopen(path, "w") : NULL;
    if (csv == NULL) {
        fprintf(stderr, "cannot write \"%s\": name a file that can be written\n", path);
        return 1;
    }
    printf("%-24s %-6s %7s %7s %7s %10s %8s %8s %8s %8s %9s\n", "shape", "radius", "windows", "links",
           "threads", "cells", "seconds", "Mcells/s", "B/cell", "exponent", "x M4RI");
    fprintf(csv, "shape,radius,windows,links,threads,cells,seconds,cells_a_second,peak_bytes_a_cell,exponent,"
                 "times_faster_than_m4ri\n");
    growth_in_windows(THOLE_RADIUS_GRAPH, "graph");
    growth_in_windows(THOLE_RADIUS_HOPS, "1");
    growth_in_links();
    static const struct {
        const char *name;
        shape shape;
    } shapes[] = {
        {"contacts", {SHAPE_CONTACTS, 150, 600, 900, 0.3}},  {"star", {SHAPE_STAR, 20000, 100, 10000, 0.3}},
        {"path", {SHAPE_PATH, 10001, 100, 10000, 0.3}},      {"ring", {SHAPE_RING, 10000, 100, 10000, 0.3}},
        {"islands", {SHAPE_ISLANDS, 10000, 100, 6000, 0.3}}, {"flicker", {SHAPE_FLICKER, 2500, 300, 1500, 1}},
        {"still", {SHAPE_STILL, 2500, 100000, 1500, 0}},
    };
    for (size_t i = 0; i < sizeof shapes / sizeof *shapes; i++) {
        figures f = measure(&shapes[i].shape, THOLE_RADIUS_HOPS, 1, 3, 1, 0);
        row(shapes[i].name, "1", &shapes[i].shape, 1, &f, (double)NAN);
    }
    shape timetable = {SHAPE_TIMETABLE, 2500, 2000, 1500, 0.3},
          small = {SHAPE_TIMETABLE, 2500, 200, 1500, 0.3};
    figures two = measure(&timetable, THOLE_RADIUS_HOPS, 1, 3, 2, 0),
            far = measure(&small, THOLE_RADIUS_HOPS, 2, 3, 1, 0);
    row("timetable, 2 threads", "1", &timetable, 2, &two, (double)NAN);
    row("timetable", "2", &small, 1, &far, (double)NAN);
    if (fclose(csv) != 0) {
        fprintf(stderr, "cannot write \"%s\": is the disk full?\n", path);
        return 1;
    }
    printf("The same as comma-separated values: %s\n", path);
    return 0;
}
