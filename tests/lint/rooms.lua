-- The rooms of core/ include only what the table in DEVELOPERS.md allows.

local allowed = {}
for line in io.lines("DEVELOPERS.md") do
    local room, may = line:match("^| core/(%w+) |.-| ([^|]+) |$")
    if room then
        allowed[room] = { [room] = true }
        for word in may:gmatch("%w+") do allowed[room][word] = true end
        if may:find("public headers", 1, true) then allowed[room]["public"] = true end
    end
end
assert(allowed.base and allowed.zigzag and allowed.host, "the table of rooms in DEVELOPERS.md was not found")

local public = {}
for header in io.open("core/thole.h"):read("a"):gmatch('#include "([%w/_]+%.h)"') do public[header] = true end

local faults, seen = 0, 0
local function fault(...)
    faults = faults + 1
    print(string.format(...))
end

for path in io.popen("git ls-files core"):lines() do
    local room = path:match("^core/(%w+)/")
    if room and path:match("%.[ch]$") then
        seen = seen + 1
        if not allowed[room] then fault("%s: room %s is not in the table of DEVELOPERS.md", path, room) end
        local number = 0
        for line in io.lines(path) do
            number = number + 1
            local included = line:match('^#include "([%w/_]+%.h)"')
            local other = included and included:match("^(%w+)/")
            if included == "thole.h" then other = "public" end
            if other and allowed[room] and not allowed[room][other] and not (allowed[room].public and public[included]) then
                fault("%s:%d: %s may not include %s", path, number, room, included)
            end
            if (line:match("#include [<\"]lua") or line:match("#include [<\"]lauxlib")) and room ~= "bind" and room ~= "host" then
                fault("%s:%d: only bind and host know that Lua exists", path, number)
            end
        end
    end
end
print(seen .. " files looked at")
os.exit(faults == 0 and seen > 20)
