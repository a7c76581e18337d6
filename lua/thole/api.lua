-- What recipes can call, said once. thole.help prints it; describe.lua makes docs/recipe-reference.md and the
-- stub for editors from it; tests/lua/test_describe.lua compares it with what there is and runs every example.
--
-- An entry has a `name` as one writes it: "thole.network", "net:keep", "bar.birth", "#net".
--   text      what it is or does
--   type      of a field: see TYPES
--   args      list of { name, type, text, optional = true }
--   options   the same for the keys of the table `options` (or of the one table it takes): { name, type, default, text }
--   returns   list of { type, text }
--   errors    what is refused, beyond arguments of the wrong type
--   example   lines that go on from api.before, and what they print
-- Types are joined by "|"; "[]" after one makes a list of them.

local api = {}

-- Each type: words for people, and what an editor knows it by.
api.types = {
    any = { "anything", "any" },
    text = { "text", "string" },
    whole = { "whole number", "integer" },
    number = { "number", "number" },
    boolean = { "true or false", "boolean" },
    table = { "table", "table" },
    ["function"] = { "function", "function" },
    ["nil"] = { "nil", "nil" },
    time = { "time", "thole.Time" },
    duration = { "duration", "thole.Duration" },
    network = { "network", "thole.Network" },
    link = { "link", "thole.Link" },
    windows = { "windows", "thole.Windows" },
    window = { "window", "thole.Window" },
    barcode = { "barcode", "thole.Barcode" },
    bar = { "bar", "thole.Bar" },
    summary = { "summary", "thole.Summary" },
    tally = { "tally", "thole.Tally" },
    filter = { "filter", "thole.Filter" },
    output = { "output", "thole.Output" },
    needed = { "needed", "thole.Needed" },
    asks = { "function of a link", "fun(link: thole.Link): any" },
    rule = { "function",
        "fun(i: integer, start: thole.Time|nil, finish: thole.Time|nil): thole.Time|nil, thole.Time|nil, string|nil" },
    format = { "function", "fun(thing: any, out: thole.Output)" },
    links = { "iterator of links", "fun(): thole.Link" },
    cuts = { "iterator of windows", "fun(): thole.Window" },
    bars = { "iterator of bars", "fun(): thole.Bar" },
}

-- Every example goes on from here.
api.before = [[
local thole = require "thole"
local net = thole.network({
    { "Brindle Quay", "Saltmarket", "2031-03-03T06:00", "2031-03-03T06:40", mode = "ferry", seats = 120 },
    { "Saltmarket", "Customs Steps", "2031-03-03T06:20", "2031-03-03T07:00", mode = "bus", seats = 32 },
    { "Customs Steps", "Brindle Quay", "2031-03-03T06:30", "2031-03-03T06:50", mode = "bus", seats = 32 },
    { "Hollow Bay", "Saltmarket", "2031-03-03T07:00", "2031-03-03T07:20", mode = "ferry" },
}, { zone = "Atlantic/Azores" })
local cuts = thole.windows.sliding(net, { length = "20 min" })
local bars = net:zigzag { windows = cuts, radius = "graph" }
]]

api.about = {
    { "Times", [[
On a calendar clock a time is ISO 8601 text with its offset, in the network's zone:
"2031-03-03T06:20:00-01:00". Where a time is taken, such text will do; without an offset it is local
time. So will a number: seconds since 1970-01-01T00:00:00Z. On a plain clock a time is a number, whole
where it can be, and numbers or their text are taken. All times are exact to a billionth of the unit;
what is finer is refused.]] },
    { "Durations", [[
Text with units, added up: "20 min", "1 h 30 min", "2 d"; or a number in the clock's unit, which is the
second on a calendar clock. On a plain clock with another unit: numbers, or numbers with that unit's name.]] },
    { "Positions", [[
Windows are numbered 1, 2, 3 and so on. Between two neighbouring windows stands their join, numbered by
the half between: 1.5 is the join of windows 1 and 2. Bars begin and end at positions.]] },
    { "Errors", [[
Every mistake is an error with the recipe's file and line; for data the data's file, line and column too.
A misspelt option or field is an error that names the nearest one.]] },
    { "Closing", [[
Networks, windows and barcodes are given back when nothing refers to them. To give one back
at once, declare it with `<close>` or call its close method; using it afterwards is an error.]] },
}

api.groups = {
    require "thole.api_thole",
    require "thole.api_network",
    require "thole.api_windows",
    (require "thole.api_barcode"), -- its first value alone
}

-- The entry of that name; "keep" will do for "net:keep" when it is the only one that ends so.
function api.find(name)
    local found, endings = nil, 0
    for _, group in ipairs(api.groups) do
        for _, entry in ipairs(group) do
            if entry.name == name or entry.name == "thole." .. name then return entry end
            if entry.name:match("[%w_]+$") == name then
                found, endings = entry, endings + 1
            end
        end
    end
    return endings == 1 and found or nil
end

-- All names, in order.
function api.names()
    local names = {}
    for _, group in ipairs(api.groups) do
        for _, entry in ipairs(group) do names[#names + 1] = entry.name end
    end
    return names
end

-- "whole[]|text" in words: "list of whole numbers or text".
function api.words(type)
    local out = {}
    for part in type:gmatch("[^|]+") do
        local name, list = part:match("^(%a+)(.*)$")
        local words = api.types[name][1]
        if list == "[]" and name ~= "windows" then words = "list of " .. words .. "s" end
        out[#out + 1] = words
    end
    return table.concat(out, " or ")
end

-- The same for editors: "integer[]|string".
function api.code(type)
    return (type:gsub("%a+", function(name) return api.types[name][2] end))
end

-- How an entry is called: "net:keep(filter)", "thole.network(events [, options])".
function api.call(entry)
    if not entry.args then return entry.name end
    local out, open = "", 0
    for i, arg in ipairs(entry.args) do
        local comma = i > 1 and ", " or ""
        if arg.optional then
            out, open = out .. (i > 1 and " [" or "[") .. comma .. arg[1], open + 1
        else
            out = out .. comma .. arg[1]
        end
    end
    return entry.name .. "(" .. out .. ("]"):rep(open) .. ")"
end

return api
