-- The barcode of a log of links, as a table: one row a bar.
--
-- Columns of the result: dim, first, last, kind, birth, death, opens, closes, in that order of sorting.
-- first and last are positions: windows are 1, 2, 3 …, the join of two neighbours is the half between.
-- Times are plain numbers unless a zone is given.

local thole = require "thole"

local p = thole.params {
    input = { thole.needed, type = "file",
            help = "log of links: delimited text, plain or compressed; - is standard input" },
    out = { "bars.csv", type = "file", help = "file for the bars; .csv or .jsonl" },
    from = { "from", help = "column of one end of a link" },
    to = { "to", help = "column of the other end" },
    start = { "start", help = "column of the time a link begins" },
    finish = { "finish", help = "column of the time it ends; without such a column a link lasts an instant" },
    windows = { type = "file", help = "file of windows, with columns start, finish and perhaps label" },
    length = { type = "duration", help = "length of sliding windows, where no file of windows is given" },
    overlap = { 0, min = 0, max = 0.999999,
            help = "share of a sliding window that the next one has in common with it" },
    radius = { "graph", help = "graph, or the number of hops within which places count as near" },
    dims = { { 0, 1 }, min = 0, max = 7, help = "dimensions: 0 for pieces, 1 for loops, 2 for hollows …" },
    join = { "union", one_of = { "union", "intersection" }, help = "what stands between two windows" },
    zone = { type = "text",
            help = "time zone of the times, as Atlantic/Azores; without it times are plain numbers" },
    faulty = { "stop", one_of = { "stop", "skip" }, help = "what to do at a faulty row" },
}

local radius = p.radius ~= "graph" and math.tointeger(tonumber(p.radius)) or p.radius
if radius ~= "graph" and (math.type(radius) ~= "integer" or radius < 0) then
    error(('radius "%s" is neither graph nor a whole number from 0: give radius=graph, radius=1, …'):format(p.radius), 0)
end
if p.windows and p.length then
    error("both windows and length are given: give a file of windows, or the length of sliding ones", 0)
elseif not (p.windows or p.length) then
    error("no windows: give windows=FILE, or length= and perhaps overlap=", 0)
end

local net = thole.read_contacts(p.input, {
    from = p.from, to = p.to, start = p.start,
    finish = p.finish ~= "finish" and p.finish or nil, -- left out, the column of that name need not be there
    time = not p.zone and "plain" or nil, zone = p.zone, faulty = p.faulty, columns = {},
})
local cuts = p.windows and thole.windows.list(net, p.windows)
    or thole.windows.sliding(net, { length = p.length, overlap = p.overlap })
local bars = net:zigzag { windows = cuts, radius = radius, dims = p.dims, join = p.join }
thole.write(p.out, bars)

local account = net:summary()
if account.skipped > 0 then
    warn(("%d faulty rows were set aside, the first in line %d (%s)"):format(account.skipped,
        account.reasons[1].first_line, account.reasons[1].what))
end
