-- Files of at most 600 lines, functions of at most 80 lines and of bounded branching, and file names that are unique.

local MOST_LINES, MOST_FUNCTION, MOST_BRANCHES = 600, 80, 20
local faults, seen, names = 0, 0, {}
local function fault(...)
    faults = faults + 1
    print(string.format(...))
end

for path in io.popen("git ls-files core lua"):lines() do
    local name = path:match("[^/]+$")
    if path:match("%.[ch]$") or path:match("%.lua$") then
        seen = seen + 1
        if names[name] and name ~= "init.lua" and name ~= "thole.lua" then fault("%s: %s has the same name", path, names[name]) end
        names[name] = path
        local lines, start, branches = 0, nil, 0
        for line in io.lines(path) do
            lines = lines + 1
            if path:match("%.c$") then
                if line:match("^[%a].*%b() ?{$") or line:match("^%s+.*%) {$") and not start then start, branches = start or lines, 0 end
                if start then
                    for word in line:gmatch("%f[%w_](%a+)%f[^%w_]") do
                        if word == "if" or word == "for" or word == "while" or word == "case" then branches = branches + 1 end
                    end
                    if line == "}" then
                        if lines - start > MOST_FUNCTION then fault("%s:%d: a function of %d lines", path, start, lines - start) end
                        if branches > MOST_BRANCHES then fault("%s:%d: a function with %d branches", path, start, branches) end
                        start = nil
                    end
                end
            end
        end
        if lines > MOST_LINES and not path:match("/library/") and name ~= "api.lua" then fault("%s: %d lines", path, lines) end
    end
end
print(seen .. " files looked at")
os.exit(faults == 0 and seen > 20)
