-- Files of at most 600 lines with names of their own; functions in C of at most 80 lines (110 in tests) and of
-- bounded branching.

package.path = "tests/lint/support/?.lua;" .. package.path
local rule = require "rule"
local c_text = require "c_text"

local MOST_LINES, MOST_BRANCHES, COLUMNS = 600, 20, 110
local function most_function(path) return path:find("^tests/") and 110 or 80 end -- tests hold tables of cases
local BRANCHES = { ["if"] = true, ["for"] = true, ["while"] = true, ["case"] = true }
-- Made from the description of the interface, not written.
local MADE = { ["lua/thole/library/thole.lua"] = true }
-- A folder's own file, found by its folder.
local OWN_NAME = { ["init.lua"] = true, ["run.lua"] = true, ["run.sh"] = true, ["thole.lua"] = true }

local names, long = {}, 0

local function check(path, text, fault)
    local name = path:match("[^/]+$")
    if names[name] and not OWN_NAME[name] then fault(1, "%s has the same name", names[name]) end
    names[name] = path
    local lines = 0
    for number, line in rule.lines(text) do
        lines = number
        if (utf8.len(line) or #line) > COLUMNS and not MADE[path] then long = long + 1 end
    end
    if lines > MOST_LINES and not MADE[path] then fault(lines, "more than %d lines", MOST_LINES) end
    if path:find("%.c$") then
        for _, f in ipairs(c_text.functions(c_text.bare(text))) do
            local branches = 0
            for word in f.body:gmatch("%f[%w_]%l+%f[^%w_]") do
                if BRANCHES[word] then branches = branches + 1 end
            end
            if f.last - f.line + 1 > most_function(path) then
                fault(f.line, "a function of %d lines is longer than %d", f.last - f.line + 1, most_function(path))
            elseif branches > MOST_BRANCHES then
                fault(f.line, "a function branches %d times, more than %d", branches, MOST_BRANCHES)
            end
        end
    end
end

local function f(lines, line)
    return "static int f(int a,\n             int b) {\n" .. (line .. "\n"):rep(lines) .. "}\n"
end

rule.run {
    check = check, files = rule.files("core lua tests recipes", "%.[chls][uh]?a?$"), least = 150,
    reset = function() names, long = { ["taken.c"] = "core/base/taken.c" }, 0 end,
    wrong = {
        { "core/base/x.c", ("int a;\n"):rep(601), "x.c:601: more than 600" },
        { "core/clock/taken.c", "", "core/base/taken.c has the same name" },
        { "tests/core/x.c", f(120, "    a++;"), "x.c:2: a function of 122 lines" },
        { "core/base/x.c", f(79, "    a++;"), "x.c:2: a function of 81 lines" },
        { "core/base/x.c", "struct s {\n    int a;\n};\n" .. f(21, "    if (a) b++;"), "x.c:5: a function branches 21 times" },
        { "core/base/x.c", "#define A(x) {x}\nint b[] = {1, 2};\n" .. f(21, "    do { b++; } while (a);"), "branches 21" },
    },
    right = {
        { "core/base/x.c", ("int a;\n"):rep(600) },
        { "lua/thole/init.lua", "" },
        { "core/base/x.c", f(78, "    a++; /* if if if */") .. f(20, "    if (a) b++;") },
        { "core/base/x.c", "static const struct s table[] = {\n" .. ("    {\"if\", 1}, \n"):rep(90) .. "};\n" },
    },
    finish = function()
        if long > 0 then print(long .. " lines are longer than 110 columns (told, not counted as faults)") end
    end,
}
