-- A week of a network as one page: when it was in one piece, which ways round there were, day by day
-- and hour by hour, and how all of that was computed.

local thole = require "thole"

local p = thole.params {
    input = { "recipes/data/archipelago-week.csv", type = "file",
            help = "log of links: delimited text, plain or compressed" },
    out = { "week-report.html", type = "file", help = "the page to write" },
    title = { "A week in the Vessary Isles", help = "heading of the page" },
    from = { "from", help = "column of one end of a link" },
    to = { "to", help = "column of the other end" },
    start = { "departs", help = "column of the time a link begins" },
    finish = { "arrives", help = "column of the time it ends" },
    zone = { "Atlantic/Azores", help = "time zone of the times; none for plain numbers" },
    length = { "1 h", help = "length of a window" },
    overlap = { 0.5, min = 0, max = 0.999999,
            help = "share of a window that the next one has in common with it" },
    join = { "union", one_of = { "union", "intersection" }, help = "what stands between two windows" },
    faulty = { "skip", one_of = { "stop", "skip" }, help =
            "what to do at a faulty row: the page lists those skipped" },
    longest = { 10, type = "integer", min = 1, help = "how many of the longest loops and pieces to list" },
}

local zone = p.zone ~= "none" and p.zone or nil
local net = thole.read_contacts(p.input, {
    from = p.from, to = p.to, start = p.start, finish = p.finish,
    time = not zone and "plain" or nil, zone = zone, faulty = p.faulty, columns = {},
})
local length = p.length:find("%a") and p.length or p.length .. " " .. net.unit
local cuts = thole.windows.sliding(net, { length = p.length, overlap = p.overlap })
local graph = net:zigzag { windows = cuts, radius = "graph", dims = { 0, 1 }, join = p.join }
local filled = net:zigzag { windows = cuts, radius = 1, dims = { 0, 1 }, join = p.join }

thole.report(p.out, {
    title = p.title,
    lead = ("The links of the log, cut into windows of %s: when they make one network, when it falls apart, "
        .. "and which ways round it has for how long."):format(length),
    { "findings", bars = graph },
    { "caution" },
    { "days", net = net, bars = graph },
    { "betti",
        { graph, dim = 0, label = "Pieces (dimension 0)" },
        { graph, dim = 1, label = "Loops (dimension 1), radius graph" },
        { filled, dim = 1, label = "Loops (dimension 1), radius 1" } },
    { "barcode",
        { graph, title = "Radius graph: places and links only" },
        { filled, title = "Radius 1: triangles of links filled in" } },
    { "diagram",
        { graph, dim = 0, title = "Pieces, radius graph" },
        { graph, dim = 1, title = "Loops, radius graph" },
        { filled, dim = 0, title = "Pieces, radius 1" },
        { filled, dim = 1, title = "Loops, radius 1" } },
    { "longest", bars = graph, dim = 1, most = p.longest, net = net, title = "The longest loops, radius graph" },
    { "longest", bars = filled, dim = 1, most = p.longest, net = net, title = "The longest loops, radius 1" },
    { "longest", bars = graph, dim = 0, most = p.longest, net = net },
    { "account", net = net },
    { "method", recipe = "recipes/week-report.lua", parameters = p, net = net, bars = { graph, filled } },
})
