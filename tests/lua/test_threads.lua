-- Worker threads: how many, and that they change nothing.

local thole = require "thole"
local t = require "harness"
local test, same, raises = t.test, t.same, t.raises

test("the number of threads is set and told", function()
    local before = thole.threads()
    same(thole.threads(3), 3)
    same(thole.threads(), 3)
    same(thole.threads(2.0), 2)
    thole.threads(before)
    raises("thole.threads takes a whole number from 1 to 256, not 0", function() thole.threads(0) end)
    raises("thole.threads takes a whole number from 1 to 256, not 257", function() thole.threads(257) end)
    raises("thole.threads takes a whole number from 1 to 256, not 1.5", function() thole.threads(1.5) end)
    raises("thole.threads takes a whole number from 1 to 256, not many", function() thole.threads("many") end)
    same(thole.threads(), before)
end)

test("one thread and three give the same file", function()
    local random = t.random(31)
    local events = {}
    for i = 1, 2500 do
        local start = random(400)
        events[i] = { "n" .. random(30), "m" .. random(30), start, start + random(12) }
    end
    local net <close> = thole.network(events)
    local cuts = thole.windows.sliding(net, { length = 4, overlap = 0.5 })
    local before, texts = thole.threads(), {}
    for _, n in ipairs { 1, 3 } do
        thole.threads(n)
        local bars <close> = net:zigzag { windows = cuts, radius = 1, dims = { 0, 1 } }
        local path = t.folder() .. "bars.csv"
        thole.write(path, bars)
        texts[#texts + 1] = t.read(path)
    end
    thole.threads(before)
    t.truth(texts[1] == texts[2], "that the files are the same")
    t.truth(select(2, texts[1]:gsub("\n", "")) > 200, "that there are bars")
end)
