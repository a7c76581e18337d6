-- The rooms of core/ include only what the table in DEVELOPERS.md allows, and the judge of barcodes shares no code
-- with the core.

package.path = "tests/lint/support/?.lua;" .. package.path
local rule = require "rule"

local allowed = {}
for line in io.lines("DEVELOPERS.md") do
    local room, may = line:match("^| core/(%w+) |.-| ([^|]+) |$")
    if room then
        allowed[room] = { [room] = true, public = may:find("public headers", 1, true) ~= nil }
        for word in may:gmatch("%w+") do allowed[room][word] = true end
    end
end
assert(allowed.base and allowed.zigzag and allowed.host, "the table of rooms in DEVELOPERS.md was not found")
assert(not allowed.base.network and not allowed.network.zigzag, "the table of rooms in DEVELOPERS.md was misread")

local public, publics = { ["thole.h"] = true }, 0
for header in io.open("core/thole.h"):read("a"):gmatch('#include "([%w/_]+%.h)"') do
    public[header] = true
    publics = publics + 1
end
assert(publics > 5, "core/thole.h includes no rooms")

-- Files of tests that see nothing of the core.
local STRANGERS = { ["judge"] = true, ["flat_complex"] = true, ["dice"] = true }

local function check(path, text, fault)
    local room = path:match("^core/(%w+)/")
    local stranger = STRANGERS[path:match("^tests/support/(.*)%.[ch]$")]
    if path:find("^core/") and path ~= "core/thole.h" and not allowed[room] then
        fault(1, "room %s is not in the table of DEVELOPERS.md", room or "none")
    end
    for number, line in rule.lines(text) do
        local included = line:match('^%s*#%s*include "([%w/_.]+)"')
        local other = included and included:match("^(%w+)/")
        if included and allowed[room] and not (other and allowed[room][other]) and
            not (allowed[room].public and public[included]) and included ~= "lua_half.h" then
            fault(number, "%s may not include %s", room, included)
        end
        if included and stranger and (allowed[other] or included == "thole.h") then
            fault(number, "what judges the core may not include %s", included)
        end
        if line:find('^%s*#%s*include [<"]l[ua]') and line:find("[<\"]lua") or line:find("[<\"]lauxlib") then
            if room and room ~= "bind" and room ~= "host" then fault(number, "only bind and host know that Lua exists") end
        end
    end
end

rule.run {
    check = check, files = rule.files("core tests/support", "%.[ch]$"), least = 50,
    wrong = {
        { "core/base/x.c", '#include "network/network.h"\n', "base may not include network/network.h" },
        { "core/network/x.h", '\n  # include "zigzag/pairs.h"\n', "x.h:2: network may not include zigzag/pairs.h" },
        { "core/base/x.c", '#include "thole.h"\n', "base may not include thole.h" },
        { "core/bind/x.c", '#include "zigzag/pairs.h"\n', "bind may not include zigzag/pairs.h" },
        { "core/clock/x.c", "#include <lua.h>\n", "only bind and host" },
        { "core/attic/x.c", "", "room attic is not in the table" },
        { "tests/support/judge.c", '#include "base/sort.h"\n', "what judges the core may not include base/sort.h" },
    },
    right = {
        { "core/zigzag/x.c", '#include "base/sort.h"\n#include "complex/cells.h"\n#include <stdlib.h>\n' },
        { "core/bind/x.c", '#include <lauxlib.h>\n#include "zigzag/zigzag.h"\n#include "thole.h"\n' },
        { "tests/support/judge.c", '#include "support/judge.h"\n' },
    },
}
