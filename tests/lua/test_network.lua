-- Networks: making them from Lua, what is in them, views.

local thole = require "thole"
local t = require "harness"
local test, same, raises = t.test, t.same, t.raises

-- All links, in order, with the fields named.
local function links(net, ...)
    local out = {}
    for link in net:each() do
        local row = { link.from, link.to, link.start, link.finish }
        for _, name in ipairs { ... } do row[name] = link[name] end
        out[#out + 1] = row
    end
    return out
end

local SMALL = {
    { "Ferry Pier", "Old Town", 10, 20, mode = "ferry", seats = 120 },
    { from = "Old Town", to = "Hill", start = 0, finish = 5, mode = "bus" },
    { "Hill", "Ferry Pier", 5, seats = 30, fare = 2.5 },
}

test("events by place and by name, in order of time", function()
    local net <close> = thole.network(SMALL)
    same(#net, 3)
    same(net.columns, { "fare", "mode", "seats" })
    same(net.unit, "s")
    same(net.zone, nil)
    same(links(net, "mode", "seats", "fare"), {
        { "Old Town", "Hill", 0, 5, mode = "bus" },
        { "Hill", "Ferry Pier", 5, 5, seats = 30, fare = 2.5 },
        { "Ferry Pier", "Old Town", 10, 20, mode = "ferry", seats = 120 },
    })
    same(net:nodes(), { "Ferry Pier", "Old Town", "Hill" })
    same({ net:span() }, { 0, 20 })
end)

test("whole numbers may name places, and columns may mix whole numbers and fractions", function()
    local net <close> = thole.network { { 1, 2, 0, 1, load = 3 }, { 2, 3, 1, 2, load = 0.5 } }
    same(links(net, "load"), { { "1", "2", 0, 1, load = 3.0 }, { "2", "3", 1, 2, load = 0.5 } })
    same(#net:keep { from = 1 }, 1)
end)

test("the summary counts what was read and what is in view", function()
    local net <close> = thole.network {
        { "A", "B", 0, 2 }, { "B", "A", 0, 2 }, { "A", "A", 1, 2 }, { "B", "C", 4 }, { "A", "B", 6, 9 } }
    local s = net:summary()
    same({ s.events, s.contacts, s.nodes, s.links, s.rows, s.read, s.self_loops, s.repeats, s.skipped },
        { 4, 1, 3, 2, 5, 4, 1, 1, 0 })
    same({ s.first, s.last, s.source, s.unit, s.zone }, { 0, 9, "thole.network", "s", nil })
    same({ s.reasons, s.remarks }, { {}, {} })
    local view <close> = net:between(4, 5)
    local v = view:summary()
    same({ v.events, v.contacts, v.nodes, v.links, v.rows, v.first, v.last }, { 1, 1, 2, 1, 5, 4, 4 })
    same(tostring(s):match("^[^\n]*\n[^\n]*"),
        "source       thole.network\nrows         5, of which 4 became links")
end)

test("an empty network is a network", function()
    local net <close> = thole.network {}
    same({ #net, net:nodes(), { net:span() }, net:summary().first }, { 0, {}, {}, nil })
    same(#net:keep(function() error("never asked") end), 0)
    for _ in net:each() do error("has a link") end
end)

test("between takes what is active in a half-open span, contacts too", function()
    local net <close> = thole.network { { "A", "B", 0, 10 }, { "B", "C", 10 }, { "C", "D", 20, 30 } }
    same(#net:between(0, 10), 1)
    same(#net:between(9.5, 10.5), 2)
    same(#net:between(10, 20), 1)
    same(#net:between(10, 21), 2)
    same(#net:between(30, 40), 0)
    raises('finish of net:between: "x" is not a time: the network\'s times are plain numbers, write for example 12.5',
        function() net:between(0, "x") end)
    raises("start of net:between: a time is a text or a number, not a nil", function() net:between() end)
end)

test("mistakes in events are named", function()
    local function refuse(text, events, opts)
        raises(text, function() thole.network(events, opts) end)
    end
    refuse("thole.network takes a list of events, each { from, to, start, finish }, not a nil", nil)
    refuse("event 2 is a number: give a table { from, to, start, finish }", { { "A", "B", 0 }, 7 })
    refuse("event 1: start is missing", { { "A", "B" } })
    refuse("event 1: to is the name of a node, not missing", { { "A" } })
    refuse("event 1: from is the name of a node, not boolean", { { true, "B", 0 } })
    refuse("event 1: from is the name of a node, not number", { { 1.5, "B", 0 } })
    refuse("event 1 gives start twice, by its place and by its name", { { "A", "B", 0, start = 1 } })
    refuse("event 1 has a key that is a number beyond 4: attributes have names",
        { { "A", "B", 0, 1, "ferry" } })
    refuse('attribute "wet" of event 1 is a boolean: give a number or a text',
        { { "A", "B", 0, 1, wet = true } })
    refuse('attribute "x" of event 2 is a text, before it was a number: give it one type',
        { { "A", "B", 0, 1, x = 1 }, { "A", "B", 0, 1, x = "1" } })
    refuse('attribute "x" of event 1 is not a number (nan): leave it out', { { "A", "B", 0, 1, x = 0 / 0 } })
    refuse('attribute "x" of event 1 is out of range', { { "A", "B", 0, 1, x = math.mininteger } })
    refuse('attribute "x" of event 2 cannot be kept exactly beside fractions: give it as a text',
        { { "A", "B", 0, 1, x = 0.5 }, { "A", "B", 0, 1, x = (1 << 53) + 1 } })
    refuse('unknown option "zon" of thole.network: did you mean "zone"?', {}, { zon = "UTC" })
    refuse('option "unit" of thole.network is for plain numbers, but a zone is given: leave out one of them',
        {},
        { zone = "UTC", unit = "km" })
    refuse('option "unit" of thole.network "a much too long name" has not 1 to 15 bytes', {},
        { unit = "a much too long name" })
    refuse('option "zone" of thole.network is a text, not a number', {}, { zone = 1 })
    refuse("options of thole.network are a table, as in { name = value }, not a string", {}, "UTC")
    refuse("options of thole.network have names, as in { name = value }, not number keys", {}, { "UTC" })
    refuse('attribute "duration" of event 1: a link has this word already, give another name',
        { { "A", "B", 0, 1, duration = 3 } })
end)

test("finish before start is the core's to refuse, with the event's number", function()
    local fine, why = pcall(thole.network, { { "A", "B", 0, 1 }, { "A", "B", 5, 4 } })
    t.truth(not fine and why:find("event 2: ", 1, true) and why:find("finish", 1, true), tostring(why))
end)

test("misspelt fields are errors, not nil", function()
    local net <close> = thole.network(SMALL)
    raises('a network has no field "sumary": did you mean "summary"?', function() local _ = net.sumary end)
    raises('a network has no field "colums": did you mean "columns"?', function() local _ = net.colums end)
    raises("a network has no field with a number for its name", function() local _ = net[1] end)
    for link in net:each() do
        raises('a link has no field "seat": did you mean "seats"?', function() local _ = link.seat end)
        raises("the fields of a link cannot be set: make a new network with thole.network",
            function() link.seats = 1 end)
    end
    raises('thole has no "read_contact": did you mean "read_contacts"?',
        function() local _ = thole.read_contact end)
    raises('thole.windows has no "slidng": did you mean "sliding"?',
        function() local _ = thole.windows.slidng end)
    raises("net:span takes a network, not a table: call it with a colon, as in net:summary()",
        function() net.span({}) end)
end)

test("the proxy shows the link that the loop is at, and none after it", function()
    local net <close> = thole.network(SMALL)
    local kept
    for link in net:each() do kept = kept or link end
    raises("the loop that this link belongs to is over: take the fields that you need inside of it",
        function()
        local _ = kept.from
    end)
    same(tostring(kept), "link of a loop that is over")
    local next_link = net:each()
    same(tostring(next_link()), "link from Old Town to Hill, 0 to 5")
end)

test("loops within loops do not share a proxy", function()
    local net <close> = thole.network(SMALL)
    local pairs_seen = {}
    for a in net:each() do
        for b in net:each() do pairs_seen[#pairs_seen + 1] = a.start .. "/" .. b.start end
    end
    same(table.concat(pairs_seen, " "), "0/0 0/5 0/10 5/0 5/5 5/10 10/0 10/5 10/10")
end)

test("attributes may have the names of methods", function()
    local net <close> = thole.network { { "A", "B", 0, 1, each = 3, close = "late" } }
    for link in net:each() do same({ link.each, link.close }, { 3, "late" }) end
end)
