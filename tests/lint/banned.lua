-- Calls that the house does not make: unbounded, locale-bound, process-wide, or past the one allocator.

package.path = "tests/lint/support/?.lua;" .. package.path
local rule = require "rule"
local c_text = require "c_text"

local function set(names)
    local out = {}
    for name in names:gmatch("%S+") do out[name] = true end
    return out
end

local EVERYWHERE = set [[atoi atol atoll atof strtod strtof strtold sscanf fscanf scanf strcpy strncpy stpcpy strcat strncat
    sprintf vsprintf strtok gets asctime ctime gmtime localtime mktime setlocale system popen alloca tmpnam tmpfile mktemp
    rand srand random srandom abort assert malloc calloc realloc free]]
-- A library in somebody's program does not print, end it, or jump; the command may.
local LIBRARY = set [[printf vprintf fprintf vfprintf puts fputs putchar fputc putc perror exit _exit quick_exit atexit raise
    signal sigaction setjmp longjmp getenv setenv putenv chdir umask fork]]
-- Where a rule does not hold, and why.
local EXCEPT = {
    ["core/base/memory.c"] = set "malloc realloc free", -- the one place that allocates
    ["core/clock/zone.c"] = set "getenv", -- TZDIR
}

local function check(path, text, fault)
    local except = EXCEPT[path] or {}
    local command = path:find("^core/host/")
    for number, line in rule.lines(c_text.bare(text)) do
        for at, name in line:gmatch("()%f[%w_]([%a_][%w_]*)%s*%f[(]%(") do
            local member = line:sub(1, at - 1):find("%.$") or line:sub(1, at - 1):find("%->$")
            if not member and not except[name] and (EVERYWHERE[name] or LIBRARY[name] and not command) then
                fault(number, "%s is banned", name)
            end
        end
    end
end

rule.run {
    check = check, files = rule.files("core", "%.[ch]$"), least = 50,
    wrong = {
        { "core/base/x.c", "int f(const char *s) { return atoi(s); }\n", "x.c:1: atoi is banned" },
        { "core/base/x.c", "char c = '\"'; /* \" */\nvoid f(void) { free (c); }\n", "x.c:2: free is banned" },
        { "core/bind/x.c", "void f(void) {\n    fputs(\"free(\", stdout);\n}\n", "x.c:2: fputs is banned" },
        { "core/clock/zone.c", "void *f(void) { return malloc(getenv(\"A\") != NULL); }\n", "malloc is banned" },
        { "core/host/x.c", "void f(const char *a) { system(a); }\n", "system is banned" },
    },
    right = {
        { "core/base/x.c", "/* malloc(1) */ void f(x *y) { tb_free(y); y->free(1); y.free(2); } // exit(1)\n" },
        { "core/base/memory.c", "void f(void *p) { free(p); }\n" },
        { "core/host/x.c", "int f(void) { return printf(\"\\\" system(1)\"); }\n" },
    },
}
