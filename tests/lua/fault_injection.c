/* Every allocation of a script that calls every binding fails, once or from then on: each time the script
 * ends with an error or does its whole job, nothing leaks and no part of a file is left; a run after that is
 * right. Allocations while the Lua half is loaded are all of one kind (the compiler of Lua): only some of
 * them fail. */
#include <dirent.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

#include <cmocka.h>
#include <lualib.h>

#include "bind/bind.h"

enum { LOADING_STEP = 97, MOST_TEXT = 16384 };

/* What fails: allocation `at` (from 1; 0 for none), or all from it on. */
typedef struct fault {
    long count, loaded, at;
    bool lasting;
    size_t live; /* bytes */
} fault;

static char folder[] = "/tmp/thole-fault-XXXXXX", output[64], links[64];
static char wanted[MOST_TEXT];
static size_t wanted_length;

static bool fails(fault *f) {
    f->count++;
    return f->at != 0 && (f->lasting ? f->count >= f->at : f->count == f->at);
}

static void *resize(fault *f, void *block, size_t old_bytes, size_t new_bytes) {
    if (new_bytes > old_bytes && fails(f))
        return NULL;
    f->live += new_bytes - old_bytes;
    if (new_bytes == 0) {
        free(block);
        return NULL;
    }
    return realloc(block, new_bytes);
}

/* For a new block, Lua gives a type in place of a size. */
static void *lua_resize(void *user, void *block, size_t old_bytes, size_t new_bytes) {
    return resize(user, block, block == NULL ? 0 : old_bytes, new_bytes);
}

static void *core_resize(void *user, void *block, size_t old_bytes, size_t new_bytes) {
    return resize(user, block, old_bytes, new_bytes);
}

static int script(lua_State *L) {
    fault *f = lua_touserdata(L, 1);
    luaL_openlibs(L);
    luaL_requiref(L, "thole", luaopen_thole, 0);
    tl_context(L)->memory->resize = core_resize;
    tl_context(L)->memory->user = f;
    f->loaded = f->count;
    if (luaL_loadfile(L, "tests/lua/every_binding.lua") != LUA_OK)
        return lua_error(L);
    lua_pushfstring(L, "%s/", folder);
    lua_call(L, 1, 0);
    return 0;
}

/* Run the script; whether it ended well, and its message. */
static bool run(fault *f, char message[static 512]) {
    snprintf(message, 512, "no state");
    lua_State *L = lua_newstate(lua_resize, f);
    if (L == NULL)
        return false;
    message[0] = '\0';
    lua_pushcfunction(L, script);
    lua_pushlightuserdata(L, f);
    int status = lua_pcall(L, 1, 0, 0);
    if (status != LUA_OK && lua_type(L, -1) == LUA_TSTRING)
        snprintf(message, 512, "%s", lua_tostring(L, -1));
    lua_close(L);
    return status == LUA_OK;
}

/* Whether there is an output; *n gets its bytes. */
static bool read_output(char out[static MOST_TEXT], size_t *n) {
    FILE *file = fopen(output, "rb");
    if (file == NULL)
        return false;
    *n = fread(out, 1, MOST_TEXT, file);
    fclose(file);
    return true;
}

/* Only whole files may be there. */
static void check_folder(void) {
    DIR *entries = opendir(folder);
    assert_non_null(entries);
    for (struct dirent *entry; (entry = readdir(entries)) != NULL;)
        if (entry->d_name[0] == '.' && strcmp(entry->d_name, ".") != 0 && strcmp(entry->d_name, "..") != 0)
            fail_msg("%s is left", entry->d_name);
    closedir(entries);
}

/* One run with allocation `at` failing; whether the script got over it. */
static bool check_fault(long at, bool lasting) {
    fault f = {.at = at, .lasting = lasting};
    char message[512], text[MOST_TEXT];
    size_t n;
    remove(output);
    bool fine = run(&f, message), written = read_output(text, &n);
    if (f.live != 0)
        fail_msg("allocation %ld%s: %zu bytes leak: %s", at, lasting ? " and all later" : "", f.live,
                 message);
    if (fine ? !written : message[0] == '\0')
        fail_msg("allocation %ld%s: %s", at, lasting ? " and all later" : "",
                 fine ? "no output" : "an error without a text");
    if (written && (n != wanted_length || memcmp(text, wanted, n) != 0))
        fail_msg("allocation %ld%s: another output", at, lasting ? " and all later" : "");
    check_folder();
    return fine;
}

static void every_allocation(bool lasting) {
    fault clean = {0};
    char message[512];
    if (!run(&clean, message))
        fail_msg("%s", message);
    assert_true(clean.live == 0);
    assert_true(read_output(wanted, &wanted_length) && wanted_length > 500 && wanted_length < MOST_TEXT);
    long over = 0, errors = 0;
    for (long at = 1; at <= clean.count; at += at < clean.loaded - LOADING_STEP ? LOADING_STEP : 1) {
        if (check_fault(at, lasting))
            over++;
        else
            errors++;
    }
    print_message("%ld allocations, %ld of them loading: %ld faults ended in an error, %ld were got over\n",
                  clean.count, clean.loaded, errors, over);
    assert_true(errors > 50);
    /* None has harmed what comes after. */
    assert_true(check_fault(0, false));
}

static void test_one_fails(void **state) {
    (void)state;
    every_allocation(false);
}

static void test_all_fail_from_then_on(void **state) {
    (void)state;
    every_allocation(true);
}

int main(void) {
    const struct CMUnitTest tests[] = {cmocka_unit_test(test_one_fails),
                                       cmocka_unit_test(test_all_fail_from_then_on)};
    if (mkdtemp(folder) == NULL)
        return 1;
    snprintf(output, sizeof output, "%s/out.txt", folder);
    snprintf(links, sizeof links, "%s/links.csv", folder);
    int failed = cmocka_run_group_tests(tests, NULL, NULL);
    remove(output);
    remove(links);
    rmdir(folder);
    return failed;
}
