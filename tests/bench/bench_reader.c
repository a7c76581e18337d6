/* How fast contacts are read, against bare counting of fields by libcsv on the same file in the same run.
 *
 * bench_reader [ROWS [RUNS]]: files of ROWS rows (default 2,000,000) are written to TMPDIR (default /tmp)
 * from a fixed seed and removed again; each is read RUNS times (default 5) by both in turn, and the best time
 * of each counts. */
#include <csv.h>
#include <fcntl.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <time.h>
#include <unistd.h>

#include "thole.h"

static uint64_t seed;

static uint64_t next_random(void) {
    seed ^= seed << 13;
    seed ^= seed >> 7;
    return seed ^= seed << 17;
}

static double now(void) {
    struct timespec t;
    clock_gettime(CLOCK_MONOTONIC, &t);
    return (double)t.tv_sec + (double)t.tv_nsec * 1e-9;
}

/* ---- shapes of file -------------------------------------------------------- */

typedef struct shape {
    const char *name, *header;
    void (*row)(FILE *file, uint64_t i, uint64_t rows);
    thole_contacts_options options;
} shape;

/* A week of seconds, mostly in order; 500 nodes. */
static uint64_t second_of(uint64_t i, uint64_t rows) { return i * 604800 / rows + next_random() % 900; }

static void short_row(FILE *file, uint64_t i, uint64_t rows) {
    uint64_t start = second_of(i, rows);
    fprintf(file, "%u,%u,%u,%u\n", (unsigned)(next_random() % 500), (unsigned)(next_random() % 500),
            (unsigned)start, (unsigned)(start + 60 + next_random() % 1200));
}

/* The same in the order of their nodes: the network has to be sorted. */
static void unsorted_row(FILE *file, uint64_t i, uint64_t rows) {
    uint64_t start = next_random() % 604800;
    fprintf(file, "%u,%u,%u,%u\n", (unsigned)(i * 500 / rows), (unsigned)(next_random() % 500),
            (unsigned)start, (unsigned)(start + 60 + next_random() % 1200));
}

static void put_time(FILE *file, uint64_t second, const char *offset) {
    unsigned day = (unsigned)(second / 86400), clock = (unsigned)(second % 86400);
    fprintf(file, ",2031-05-%02uT%02u:%02u:%02u%s", 4 + day, clock / 3600, clock / 60 % 60, clock % 60,
            offset);
}

static void iso_row(FILE *file, uint64_t i, uint64_t rows, const char *offset) {
    static const char *const MODES[] = {"ferry", "bus", "rail"};
    uint64_t start = second_of(i, rows);
    fprintf(file, "Quay %u,Quay %u", (unsigned)(next_random() % 500), (unsigned)(next_random() % 500));
    put_time(file, start, offset);
    put_time(file, start + 60 + next_random() % 1200, offset);
    fprintf(file, ",%s,L%u,%u,%u.%u\n", MODES[next_random() % 3], (unsigned)(next_random() % 40),
            20 + (unsigned)(next_random() % 100), 2 + (unsigned)(next_random() % 30),
            (unsigned)(next_random() % 10));
}

static void offset_row(FILE *file, uint64_t i, uint64_t rows) { iso_row(file, i, rows, "-01:00"); }
static void local_row(FILE *file, uint64_t i, uint64_t rows) { iso_row(file, i, rows, ""); }

static void quoted_row(FILE *file, uint64_t i, uint64_t rows) {
    uint64_t start = second_of(i, rows);
    fprintf(file, "\"Caf\xC3\xA9 \"\"Sol\"\", %u\",\"Pier, %u\",\"%u\",\"%u\"\n",
            (unsigned)(next_random() % 500), (unsigned)(next_random() % 500), (unsigned)start,
            (unsigned)(start + 60));
}

#define ROLES .from = {"from", 0}, .to = {"to", 0}, .start = {"start", 0}, .finish = {"finish", 0}

static const shape SHAPES[] = {
    {"short rows", "from,to,start,finish\n", short_row, {ROLES}},
    {"short rows out of order", "from,to,start,finish\n", unsorted_row, {ROLES}},
    {"ISO times, 4 attributes", "from,to,start,finish,mode,line,seats,price\n", offset_row, {ROLES}},
    {"local ISO times, 4 attributes",
     "from,to,start,finish,mode,line,seats,price\n",
     local_row,
     {ROLES, .zone = "Atlantic/Azores"}},
    {"quoted fields", "from,to,start,finish\n", quoted_row, {ROLES}},
};

/* ---- measuring ------------------------------------------------------------- */

typedef struct counts {
    uint64_t fields, rows;
} counts;

static void count_field(void *text, size_t length, void *user) {
    (void)text, (void)length;
    ((counts *)user)->fields++;
}

static void count_row(int end, void *user) {
    (void)end;
    ((counts *)user)->rows++;
}

static double by_libcsv(const char *path, counts *found) {
    static char block[1 << 18];
    struct csv_parser parser;
    double begin = now();
    *found = (counts){0};
    int file = open(path, O_RDONLY);
    if (file < 0 || csv_init(&parser, CSV_APPEND_NULL) != 0)
        exit(1);
    for (ssize_t n; (n = read(file, block, sizeof block)) > 0;)
        if (csv_parse(&parser, block, (size_t)n, count_field, count_row, found) != (size_t)n)
            exit(1);
    csv_fini(&parser, count_field, count_row, found);
    csv_free(&parser);
    close(file);
    return now() - begin;
}

static double by_thole(const char *path, const thole_contacts_options *options, uint64_t rows,
                       size_t *bytes) {
    thole_memory memory = {0};
    thole_context context = {.memory = &memory, .threads = 1};
    thole_network *network = NULL;
    thole_error error;
    double begin = now();
    if (thole_read_contacts(&context, path, options, &network, &error) != THOLE_OK) {
        fprintf(stderr, "%s\n", error.text);
        exit(1);
    }
    double seconds = now() - begin;
    if (thole_network_account(network)->rows != rows) {
        fprintf(stderr, "%s: rows are missing\n", path);
        exit(1);
    }
    *bytes = thole_network_bytes(network, NULL);
    thole_network_release(network);
    return seconds;
}

static void measure(const shape *s, uint64_t rows, int runs) {
    char path[300];
    const char *folder = getenv("TMPDIR");
    snprintf(path, sizeof path, "%.200s/bench-reader-XXXXXX",
             folder != NULL && folder[0] != '\0' ? folder : "/tmp");
    int made = mkstemp(path);
    FILE *file = made >= 0 ? fdopen(made, "w") : NULL;
    if (file == NULL)
        exit(1);
    seed = UINT64_C(20310504);
    fputs(s->header, file);
    for (uint64_t i = 0; i < rows; i++)
        s->row(file, i, rows);
    struct stat about;
    if (fclose(file) != 0 || stat(path, &about) != 0)
        exit(1);
    double csv = 1e9, thole = 1e9;
    size_t bytes = 0;
    for (int run = 0; run < runs; run++) {
        counts found;
        double seconds = by_libcsv(path, &found);
        csv = seconds < csv ? seconds : csv;
        if (found.rows != rows + 1)
            exit(1);
        seconds = by_thole(path, &s->options, rows, &bytes);
        thole = seconds < thole ? seconds : thole;
    }
    double megabytes = (double)about.st_size / 1e6;
    printf("%-30s %7.1f MB  libcsv counts %6.2f Mrows/s %6.0f MB/s   thole %6.2f Mrows/s %6.0f MB/s   ratio "
           "%.2f   %.1f bytes an event kept\n",
           s->name, megabytes, (double)rows / csv / 1e6, megabytes / csv, (double)rows / thole / 1e6,
           megabytes / thole, thole / csv, (double)bytes / (double)rows);
    unlink(path);
}

int main(int argc, char **argv) {
    uint64_t rows = argc > 1 ? strtoull(argv[1], NULL, 10) : 2000000;
    int runs = argc > 2 ? (int)strtol(argv[2], NULL, 10) : 5;
    printf("best of %d runs, %llu rows; aim: ratio at most 1.5\n", runs, (unsigned long long)rows);
    for (size_t i = 0; i < sizeof SHAPES / sizeof *SHAPES; i++)
        measure(&SHAPES[i], rows, runs);
    return 0;
}
