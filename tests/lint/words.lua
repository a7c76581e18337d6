-- What no file may hold: paths of one machine, hosts of package registries, unfinished work, talk of how the work
-- was handed out; and untidy text.

package.path = "tests/lint/support/?.lua;" .. package.path
local rule = require "rule"

-- Written in two pieces, so that this file does not hold them. A line with six X makes a name by mkdtemp.
local PATTERNS = {
    { "a path of one machine", { "/wo" .. "rk/", "/ro" .. "ot/", "/ho" .. "me/%l+/%l+/", "/tm" .. "p/[%w_-]+[%./-]" } },
    { "a registry's host", { "debian%.or" .. "g", "npmjs%.or" .. "g", "pypi%.or" .. "g", "crates%.i" .. "o/",
        "luarocks%.or" .. "g" } },
    { "unfinished work", { "%f[%w]TO" .. "DO%f[%W]", "%f[%w]FIX" .. "ME%f[%W]", "%f[%w]X" .. "XX%f[%W]" } },
    { "how the work was handed out", { "%f[%w]tick" .. "ets?%f[%W]", "iss" .. "ue #?%d", "%f[%w]DES" .. "IGN%.md",
        "%f[%w]CODE" .. "BASES", "%f[%w]ZIG" .. "ZAG%.md", "language mod" .. "el", "%f[%w]A" .. "I%f[%W]" } },
}

local function check(path, text, fault)
    local rows = path:find("%.csv$") -- names of a made-up world
    local outputs = path:find("%.case$") -- what a command prints, as it is
    for number, line in rule.lines(text) do
        for _, entry in ipairs(rows and {} or PATTERNS) do
            for _, pattern in ipairs(entry[2]) do
                local at = line:find(pattern)
                if at and not line:find("X" .. "XXXXX") then fault(number, "%s: %s", entry[1], line:sub(at, at + 40)) end
            end
        end
        if line:find("[ \t]$") and not outputs then fault(number, "blanks at the end of the line") end
        if line:find("\r") then fault(number, "a carriage return") end
    end
    if not utf8.len(text) then fault(1, "not UTF-8") end
    if #text > 0 and text:sub(-1) ~= "\n" then fault(1, "no line end at the end of the file") end
end

local files = {}
for _, path in ipairs(rule.files(".", "")) do
    local data = path:find("%.gz$") or path:find("^tests/fuzz/corpus")
    if not data then files[#files + 1] = path end
end

rule.run {
    check = check, files = files, least = 200,
    wrong = {
        { "docs/x.md", "a\nsee /wo" .. "rk/main\n", "x.md:2: a path of one machine" },
        { "tests/x.sh", "cat /tm" .. "p/b-mine/out\n", "a path of one machine" },
        { "Makefile", "# from deb.debian.or" .. "g\n", "a registry's host" },
        { "core/base/x.c", "/* TO" .. "DO: all of it */\n", "unfinished work" },
        { "docs/x.md", "as iss" .. "ue 2 wants\n", "how the work" },
        { "docs/x.md", "two blanks  \n", "blanks at the end" },
        { "docs/x.md", "a\r\n", "a carriage return" },
        { "docs/x.md", "no end", "no line end" },
        { "docs/x.md", "\xE9\n", "not UTF-8" },
    },
    right = {
        { "docs/x.md", "A plain line – with a dash.\n\nMAIN, AID, mastodon, an issue of it, a homework/ folder, /tm" .. "p alone\n" },
        { "docs/empty", "" },
        { "tests/cli/x.case", "out\n  text \n" },
        { "tests/lua/x.c", 'char folder[] = "/tm' .. 'p/x-X' .. 'XXXXX";\n' },
    },
}
