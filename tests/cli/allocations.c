/* Every allocation of `thole run recipes/barcode.lua` on a small input fails once: the core's, Lua's, the libraries'.
 *
 *     allocations BUILD
 *
 * What starting up allocates before any recipe runs (nine tenths: loading the Lua half) is failed at every 23rd allocation only,
 * from SEED on, unless EVERY is set; all that the recipe itself asks for is failed one by one.
 *
 * Each run must end by itself with exit 0 (it could do without) or 1 and a message; the old output must stand, or the new one be
 * whole; no part file may be left; and no more blocks may be left than after a run in which nothing fails. */
#include <dirent.h>
#include <fcntl.h>
#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <sys/wait.h>
#include <unistd.h>

enum { WORKERS = 2, MOST_TEXT = 4096 };

static const char *build;
static char folder[256];

static const char contacts[] = "from,to,start,finish,mode\nAldermoor,Brack,0,10,ferry\nBrack,Corran,0,20,bus\n"
                               "Corran,Aldermoor,5,20,ferry\nCorran,Drumlin,15,30,launch\n";
static const char old_output[] = "what was there before\n";
static char new_output[MOST_TEXT];

static void write_file(const char *path, const char *text) {
    FILE *file = fopen(path, "w");
    if (file == NULL || fputs(text, file) < 0 || fclose(file) != 0)
        exit(2);
}

static void read_file(const char *path, char *out) {
    FILE *file = fopen(path, "r");
    size_t n = file != NULL ? fread(out, 1, MOST_TEXT - 1, file) : 0;
    out[n] = '\0';
    if (file != NULL)
        fclose(file);
}

/* Run a recipe (NULL: the barcode's, in worker's folder) with the at-th allocation failing; the wait status. */
static int run(const char *recipe, int worker, long at, char *said, long *calls, long *live) {
    char out[512], err[512], report[512], in[512], number[32], preload[512], host[512], to[600], from[600];
    snprintf(out, sizeof out, "%s/%d/bars.csv", folder, worker);
    snprintf(err, sizeof err, "%s/%d.err", folder, worker);
    snprintf(report, sizeof report, "%s/%d.report", folder, worker);
    snprintf(in, sizeof in, "%s/in.csv", folder);
    snprintf(number, sizeof number, "%ld", at);
    snprintf(preload, sizeof preload, "%s/tests/cli/fail_nth.so", build);
    snprintf(host, sizeof host, "%s/thole", build);
    snprintf(to, sizeof to, "out=%s", out);
    snprintf(from, sizeof from, "input=%s", in);
    write_file(out, old_output);
    unlink(report);
    pid_t child = fork();
    if (child == 0) {
        int file = open(err, O_WRONLY | O_CREAT | O_TRUNC, 0600), null = open("/dev/null", O_RDWR);
        dup2(null, 0);
        dup2(null, 1);
        dup2(file, 2);
        setenv("FAIL_AT", number, 1);
        setenv("FAIL_REPORT", report, 1);
        setenv("LD_PRELOAD", preload, 1);
        if (recipe != NULL)
            execl(host, host, "run", "--quiet", "--threads", "1", recipe, (char *)NULL);
        else
            execl(host, host, "run", "--quiet", "--threads", "1", "recipes/barcode.lua", from, to, "length=10", "overlap=0.5",
                  "radius=1", (char *)NULL);
        _exit(98);
    }
    int status = 0;
    waitpid(child, &status, 0);
    read_file(err, said);
    char text[MOST_TEXT];
    read_file(report, text);
    *calls = *live = -1;
    sscanf(text, "%ld %ld", calls, live);
    return status;
}

static bool part_files(int worker) {
    char path[512];
    snprintf(path, sizeof path, "%s/%d", folder, worker);
    DIR *dir = opendir(path);
    bool found = false;
    for (struct dirent *entry; dir != NULL && (entry = readdir(dir)) != NULL;)
        found = found || (strcmp(entry->d_name, ".") != 0 && strcmp(entry->d_name, "..") != 0 && strcmp(entry->d_name, "bars.csv") != 0);
    if (dir != NULL)
        closedir(dir);
    return found;
}

/* What is wrong with the at-th failure, or NULL. */
static const char *verdict(int worker, long at, long usual_live, char *said, bool *refused) {
    long calls, live;
    char path[512], now[MOST_TEXT];
    int status = run(NULL, worker, at, said, &calls, &live);
    snprintf(path, sizeof path, "%s/%d/bars.csv", folder, worker);
    read_file(path, now);
    if (!WIFEXITED(status))
        return "it ended by a signal";
    *refused = WEXITSTATUS(status) != 0;
    /* 2 is for a recipe that cannot be opened, here for want of memory. */
    if (WEXITSTATUS(status) > 1 && !(WEXITSTATUS(status) == 2 && strstr(said, "Cannot allocate memory") != NULL))
        return "its exit code is neither 0 nor 1";
    if (*refused && said[0] == '\0')
        return "it failed without a word";
    if (strcmp(now, *refused ? old_output : new_output) != 0 && strcmp(now, new_output) != 0)
        return "the output is neither the old nor the new";
    if (part_files(worker))
        return "it left a part file";
    if (live > usual_live)
        return "it left memory in use";
    return NULL;
}

static int work(int worker, long startup, long count, long usual_live) {
    enum { STRIDE = 23 };
    const char *seed = getenv("SEED");
    bool every = getenv("EVERY") != NULL;
    long phase = seed != NULL ? strtol(seed, NULL, 10) % STRIDE : 0, turn = 0, tried = 0, refusals = 0;
    int faults = 0;
    for (long at = 1; at <= count; at++) {
        if (at <= startup && !every && at % STRIDE != phase)
            continue;
        if (turn++ % WORKERS != worker)
            continue;
        tried++;
        char said[MOST_TEXT];
        bool refused = false;
        const char *what = verdict(worker, at, usual_live, said, &refused);
        refusals += refused;
        if (what != NULL && faults++ < 10)
            printf("allocation %ld: %s\n%s\n", at, what, said);
    }
    printf("%ld of %ld failures were told\n", refusals, tried);
    fflush(stdout);
    return faults > 0 || refusals == 0;
}

int main(int n, char **argument) {
    if (n != 2)
        return 2;
    build = argument[1];
    const char *where = getenv("TMPDIR");
    snprintf(folder, sizeof folder, "%s/allocations-XXXXXX", where != NULL && where[0] != '\0' ? where : "/tmp");
    if (mkdtemp(folder) == NULL)
        return 2;
    char path[512], said[MOST_TEXT];
    snprintf(path, sizeof path, "%s/in.csv", folder);
    write_file(path, contacts);
    for (int i = 0; i < WORKERS; i++) {
        snprintf(path, sizeof path, "%s/%d", folder, i);
        mkdir(path, 0700);
    }
    long count, live, startup;
    snprintf(path, sizeof path, "%s/empty.lua", folder);
    write_file(path, "local thole = require \"thole\"\n");
    int status = run(path, 0, 0, said, &startup, &live);
    if (!WIFEXITED(status) || WEXITSTATUS(status) != 0 || startup < 100) {
        printf("an empty recipe fails: %s\n", said);
        return 1;
    }
    status = run(NULL, 0, 0, said, &count, &live);
    snprintf(path, sizeof path, "%s/0/bars.csv", folder);
    read_file(path, new_output);
    if (!WIFEXITED(status) || WEXITSTATUS(status) != 0 || strncmp(new_output, "dim,", 4) != 0 || count <= startup) {
        printf("the good run is none: %s\n", said);
        return 1;
    }
    printf("%ld allocations, %ld of them to start up; %ld blocks left after a good run\n", count, startup, live);
    fflush(stdout);
    pid_t children[WORKERS];
    int faults = 0;
    for (int i = 0; i < WORKERS; i++)
        if ((children[i] = fork()) == 0)
            _exit(work(i, startup, count, live));
    for (int i = 0; i < WORKERS; i++) {
        waitpid(children[i], &status, 0);
        faults += status != 0;
    }
    char command[400];
    snprintf(command, sizeof command, "rm -rf '%s'", folder);
    if (system(command) != 0)
        faults++;
    return faults != 0;
}
