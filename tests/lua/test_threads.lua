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

-- The host has its own stories of signals, in tests/cli.
if not package.loaded["thole.host"] then
    test("Ctrl-C ends a long computation in the stock interpreter", function()
        local script = t.write("long.lua", [[
local thole = require "thole"
local events = {}
for i = 1, 20000 do events[i] = { "n" .. i * 7919 % 97, "m" .. i * 104729 % 89, i, i + 400 } end
local net = thole.network(events)
local cuts = thole.windows.sliding(net, { length = 50, overlap = 0.9999 })
io.stdout:setvbuf("no")
print("begins")
-- one call, of minutes
local fine, why = pcall(net.zigzag, net, { windows = cuts, radius = 2, dims = { 0, 1 } })
print(fine, why)
]])
        -- The shell waits until the script says that it begins.
        local fifo = t.folder() .. "fifo"
        local pipe = io.popen(("mkfifo '%s'; timeout -s KILL 60 '%s' '%s' > '%s' 2>&1 & job=$!; "):format(fifo, arg[-1],
            script, fifo)
                .. ("{ read line; echo $line; sleep 0.3; kill -INT $job; cat; } < '%s'; wait $job"):format(fifo))
        local said = pipe:read("a")
        pipe:close()
        t.truth(said:find("^begins\n"), "that it began: " .. said)
        t.truth(said:find("interrupted!", 1, true), "that it was interrupted: " .. said)
        t.truth(not said:find("true", 1, true), "that it did not end by itself: " .. said)
    end)
end
