-- Every function of the public headers has its documentation: a comment before it, or on its line.

local faults, seen = 0, 0
for header in io.open("core/thole.h"):read("a"):gmatch('#include "([%w/_]+%.h)"') do
    local documented, number = false, 0
    for line in io.lines("core/" .. header) do
        number = number + 1
        if line:match("%*/") or line:match("^/%*") or line:match("^ %*") then
            documented = true
        elseif line:match("^%s*$") then
            documented = false -- a comment speaks for what follows it without a blank line
        end
        if line:match("^THOLE_API") then
            seen = seen + 1
            local accessor = line:match("_retain%(") or line:match("_release%(") or line:match("_count%(") or line:match("_bytes%(")
            if not documented and not line:match("/%*") and not accessor and not line:match("%(const thole_%w+ %*%w+%)") and not line:match("%(const thole_%w+ %*%w+, [%w_]+ %w+%)") then
                faults = faults + 1
                print(string.format("core/%s:%d: not documented: %s", header, number, line))
            end
        end
    end
end
print(seen .. " functions looked at")
os.exit(faults == 0 and seen > 50)
