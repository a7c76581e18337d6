-- thole.read_contacts: options, and what becomes of a file. The reader's own tests are in tests/core.

local thole = require "thole"
local t = require "harness"
local test, same, raises = t.test, t.same, t.raises

local function links(net, ...)
    local out = {}
    for link in net:each() do
        local row = { link.from, link.to, link.start, link.finish }
        for _, name in ipairs { ... } do row[name] = link[name] end
        out[#out + 1] = row
    end
    return out
end

local function reads(text, opts)
    return thole.read_contacts(t.write("in.csv", text), opts)
end

test("the four usual words, and attributes by the rest", function()
    local net <close> = reads "from,to,start,finish,mode,seats\nA,B,0,5,ferry,40\nB,C,2.5,3,bus,\n"
    same(net.columns, { "mode", "seats" })
    same(links(net, "mode", "seats"), { { "A", "B", 0, 5, mode = "ferry", seats = 40 }, { "B", "C", 2.5, 3,
        mode = "bus" } })
    local s = net:summary()
    same({ s.rows, s.read, s.source }, { 2, 2, t.folder() .. "in.csv" })
end)

test("without a finish column all are contacts, with linger for a while", function()
    local text = "from,to,start\nA,B,1\nB,C,2\n"
    same(links(reads(text)), { { "A", "B", 1, 1 }, { "B", "C", 2, 2 } })
    same(links(reads(text, { linger = "1 min" })), { { "A", "B", 1, 61 }, { "B", "C", 2, 62 } })
    same(links(reads(text, { linger = 0.5 })), { { "A", "B", 1, 1.5 }, { "B", "C", 2, 2.5 } })
    local fine, why = pcall(reads, text, { finish = "end" })
    t.truth(not fine and why:find('"end"', 1, true), "that a finish column which is named must be there: "
        .. tostring(why))
end)

test("columns by name, number and duration; another separator; no header", function()
    same(links(reads("a;b;when;lasts\nX;Y;10;5\n",
        { from = "a", to = 2, start = "when", duration = "lasts" })),
        { { "X", "Y", 10, 15 } })
    same(links(reads("10\tX\tY\n", { header = false, start = 1, from = 2, to = 3, separator = "\t" })),
        { { "X", "Y", 10, 10 } })
    same(links(reads("10,X,Y,12\n", { header = false, start = 1, from = 2, to = 3, finish = 4 })),
        { { "X", "Y", 10, 12 } })
end)

test("clocks: zone, unit, form of times", function()
    local text = "from,to,start,finish\nA,B,2031-01-04T06:20,2031-01-04T07:00\n"
    local net <close> = reads(text, { zone = "Atlantic/Azores" })
    same({ net.zone, net.unit }, { "Atlantic/Azores", "s" })
    same(links(net), { { "A", "B", "2031-01-04T06:20:00-01:00", "2031-01-04T07:00:00-01:00" } })
    same(links(reads("from,to,start\nA,B,60\n", { time = "epoch" })),
        { { "A", "B", "1970-01-01T00:01:00Z", "1970-01-01T00:01:00Z" } })
    local km <close> = reads("from,to,start,finish\nA,B,1,2\n", { unit = "km", time = "plain" })
    same({ km.unit, km.zone }, { "km", nil })
end)

test("only the attributes that are asked for", function()
    local text = "from,to,start,finish,mode,seats\nA,B,0,5,ferry,40\n"
    same(reads(text, { columns = { "seats" } }).columns, { "seats" })
    same(reads(text, { columns = {} }).columns, {})
end)

test("faulty rows stop the run, or are counted", function()
    local text = "from,to,start,finish\nA,B,0,5\nA,B,9,3\nA,B,x,3\nC,C,1,2\n"
    local fine, why = pcall(reads, text)
    t.truth(not fine and why:find("in.csv:3:", 1, true), "that the line is named: " .. tostring(why))
    local net <close> = reads(text, { faulty = "skip" })
    local s = net:summary()
    same({ s.rows, s.read, s.skipped, s.self_loops, #s.reasons }, { 4, 1, 2, 1, 2 })
    same({ s.reasons[1].count, s.reasons[1].first_line, s.reasons[2].first_line }, { 1, 3, 4 })
    t.truth(tostring(s):find("2 faulty", 1, true), "that the summary shows them")
end)

test("mistakes in options are named", function()
    local path = t.write("in.csv", "from,to,start,finish\nA,B,0,5\n")
    local function refuse(text, opts, other)
        raises(text, function() thole.read_contacts(other or path, opts) end)
    end
    refuse('unknown option "form" of thole.read_contacts: did you mean "from"?', { form = "a" })
    refuse('option "from" of thole.read_contacts is the name of a column or its number, not a boolean',
        { from = true })
    refuse('option "to" of thole.read_contacts is a whole number, not 1.5', { to = 1.5 })
    refuse('option "to" of thole.read_contacts is 0: give 1 to 1000000', { to = 0 })
    refuse('option "separator" of thole.read_contacts is ",", ";" or "\\t", not "|"', { separator = "|" })
    refuse('option "time" of thole.read_contacts has no choice "unix": known are iso, epoch, plain',
        { time = "unix" })
    refuse('option "faulty" of thole.read_contacts has no choice "skp": did you mean "skip"?',
        { faulty = "skp" })
    refuse('option "header" of thole.read_contacts is true or false, not a number', { header = 0 })
    refuse('option "columns" of thole.read_contacts is a list of names, not a string', { columns = "mode" })
    refuse('option "columns" of thole.read_contacts has a number in it: give names', { columns = { 5 } })
    refuse('option "linger" of thole.read_contacts: "x" is not a duration: write for example "20 min" or "1 h 30 min"', { linger = "x" })
    refuse('option "zone" of thole.read_contacts has a NUL byte in it', { zone = "UTC\0" })
    refuse("the path for thole.read_contacts has a NUL byte in it", nil, path .. "\0.txt")
    refuse("the path for thole.read_contacts is empty: name a file", nil, "")
    raises("the path for thole.read_contacts is a text, not a nil", function() thole.read_contacts() end)
end)

test("a file that is not there is named", function()
    local fine, why = pcall(thole.read_contacts, t.folder() .. "none.csv")
    t.truth(not fine and why:find("none.csv", 1, true), tostring(why))
end)
