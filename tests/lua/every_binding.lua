-- Calls every function that is written in C; fault_injection.c runs it with memory refused. The folder for
-- files is the chunk's argument.

local folder = ...
local thole = require "thole"

local net <close> = thole.network({
    { "Old Town", "Hill", "2031-03-03T06:00", "2031-03-03T06:30", mode = "bus", seats = 30 },
    { "Hill", "Quay", "2031-03-03T06:10", "2031-03-03T06:40", mode = "bus", fare = 2.5, seats = 30.5 },
    { "Quay", "Old Town", "2031-03-03T06:20", "2031-03-03T06:50", mode = "ferry" },
}, { zone = "Atlantic/Azores" })
local links = folder .. "links.csv"
thole.write(links, net)
local read <close> = thole.read_contacts(links,
    { zone = "Atlantic/Azores", columns = { "mode", "seats" }, linger = "1 min" })

local some <close> = read:keep { mode = { "bus", "ferry" },
    any = { { seats = { min = 1 } }, { no = { seats = true } } } }
local rest <close> = read:drop(function(link) return link.duration > 1800 or link.mode == nil
    or link.from == "Hill" end)
local early <close> = net:between("2031-03-03T06:00", "2031-03-03T06:15")
local counts = tostring(net:summary()):gsub("memory[^\n]*", "") -- which depends on what was refused
local text = { counts, tostring(rest), net.zone, net.unit, table.concat(net.columns, " ") }
for _, name in ipairs(net:nodes()) do text[#text + 1] = name end
for link in net:each() do text[#text + 1] = tostring(link) .. tostring(link.fare) end
text[#text + 1] = table.concat({ #some, #rest, #early, early:span() }, " ")

local cuts <close> = thole.windows.sliding(net, { length = "10 min", overlap = 0.5 })
local listed <close> = thole.windows.list(net, { { "2031-03-03T06:00", "2031-03-03T06:20", "first" } })
local ruled <close> = thole.windows.by(net, function()
    coroutine.yield("2031-03-03T06:00", "2031-03-03T06:20", "a")
    coroutine.yield("2031-03-03T06:20", "2031-03-03T06:50")
end)
for window in ruled:each() do text[#text + 1] = window.label .. window.start .. window.finish end

local bars <close> = net:zigzag { windows = cuts, radius = "graph", dims = { 0, 1 }, max_memory = "1 GB" }
for bar in bars:each { longest = 3, shortest_lifespan = "5 min" } do
    text[#text + 1] = bar.birth .. bar.kind .. bars:text(bar.index, "death")
end
text[#text + 1] = table.concat(bars:betti(1, { joins = true }), " ") .. bars:count { dim = 1, at = 2 }
text[#text + 1] = table.concat({ bars.radius, bars.join, #bars.windows, listed[1].label, bars.cells[1],
    bars.dims[2] }, " ")
thole.threads(thole.threads())

thole.write(folder .. "out.txt", table.concat(text, "\n"))
