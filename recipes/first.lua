local thole = require "thole"
local p = thole.params { input = "recipes/data/archipelago-week.csv" }
local week = thole.read_contacts(p.input, { start = "departs", finish = "arrives", zone = "Atlantic/Azores" })
local boats = week:drop { mode = "bus" }
local hours = thole.windows.sliding(boats, { length = "1 h", overlap = 0.5 })
local bars = boats:zigzag { windows = hours, radius = "graph", dims = { 0, 1 } }
print(#boats .. " sailings, " .. bars:count { dim = 1 } .. " loops; the longest three:")
for loop in bars:each { dim = 1, longest = 3 } do
    print(loop.opens .. " to " .. loop.closes, loop.kind)
end
