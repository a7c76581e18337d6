/* Runs files through a fuzz target once each, for compilers without libFuzzer:
 *     replay FILE-OR-FOLDER...
 * A failure aborts; otherwise the number of files is printed, and no file at all is a failure too. */
#include <dirent.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size);

static int run_file(const char *path) {
    FILE *file = fopen(path, "rb");
    size_t n = 0, room = 1 << 16;
    uint8_t *data = malloc(room);
    while (file != NULL && data != NULL) {
        size_t got = fread(data + n, 1, room - n, file);
        n += got;
        if (got == 0)
            break;
        if (n == room)
            data = realloc(data, room *= 2);
    }
    if (file == NULL || data == NULL || ferror(file)) {
        fprintf(stderr, "cannot read %s\n", path);
        exit(1);
    }
    fclose(file);
    /* exactly as long as the input, so that reading beyond it is seen by a checker of addresses */
    uint8_t *exact = realloc(data, n > 0 ? n : 1);
    (void)LLVMFuzzerTestOneInput(exact != NULL ? exact : data, n);
    free(exact != NULL ? exact : data);
    return 1;
}

static int run_folder(DIR *folder, const char *path) {
    int done = 0;
    for (struct dirent *entry; (entry = readdir(folder)) != NULL;) {
        char name[1024];
        if (entry->d_name[0] == '.')
            continue;
        int n = snprintf(name, sizeof name, "%s/%s", path, entry->d_name);
        if (n > 0 && (size_t)n < sizeof name)
            done += run_file(name);
    }
    closedir(folder);
    return done;
}

int main(int argc, char **argv) {
    int done = 0;
    for (int i = 1; i < argc; i++) {
        DIR *folder = opendir(argv[i]);
        done += folder != NULL ? run_folder(folder, argv[i]) : run_file(argv[i]);
    }
    printf("%d inputs replayed\n", done);
    return done > 0 ? 0 : 1;
}
