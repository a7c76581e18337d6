-- Filters by table, run by the core, against functions, run by Lua.

local thole = require "thole"
local t = require "harness"
local test, same, raises = t.test, t.same, t.raises

local NET = thole.network {
    { "A", "B", 0, 10, mode = "ferry", seats = 40, route = "R1" },
    { "B", "C", 5, 15, mode = "bus", seats = 90, route = "R2" },
    { "C", "A", 20, 21, mode = "ferry", seats = 91 },
    { "A", "D", 30, mode = "bus", fare = 2.5, route = "R1" },
}

-- Starts of the links kept; drop must give the others.
local function starts(filter)
    local kept, dropped = NET:keep(filter), NET:drop(filter)
    local out = {}
    for link in kept:each() do out[#out + 1] = link.start end
    same(#kept + #dropped, #NET)
    for link in dropped:each() do
        for _, start in ipairs(out) do t.truth(start ~= link.start, "that no link is kept and dropped") end
    end
    return out
end

test("one field: equal, list, range, present, missing", function()
    same(starts { mode = "ferry" }, { 0, 20 })
    same(starts { route = { "R1", "R9" } }, { 0, 30 })
    same(starts { seats = { min = 40, max = 90 } }, { 0, 5 })
    same(starts { seats = { min = 41 } }, { 5, 20 })
    same(starts { seats = { max = 40 } }, { 0 })
    same(starts { seats = 90.0 }, { 5 })
    same(starts { seats = { max = 40.5 } }, { 0 })
    same(starts { fare = 2.5 }, { 30 })
    same(starts { fare = { min = 2, max = 3 } }, { 30 })
    same(starts { route = true }, { 0, 5, 30 })
    same(starts { route = false }, { 20 })
end)

test("ends and times of links", function()
    same(starts { from = "A" }, { 0, 30 })
    same(starts { to = { "B", "C" } }, { 0, 5 })
    same(starts { start = { min = 5, max = "20" } }, { 5, 20 })
    same(starts { finish = { max = 15 } }, { 0, 5 })
    same(starts { duration = { min = 10 } }, { 0, 5 })
    same(starts { duration = "1 s" }, { 20 })
    same(starts { duration = 0 }, { 30 })
end)

test("several conditions, and words that join filters", function()
    same(starts { mode = "ferry", seats = { max = 50 } }, { 0 })
    same(starts { any = { { mode = "bus" }, { seats = { min = 91 } } } }, { 5, 20, 30 })
    same(starts { all = { { mode = "bus" }, { route = "R1" } } }, { 30 })
    same(starts { no = { mode = "bus" } }, { 0, 20 })
    same(starts { no = { { mode = "bus" }, { route = "R1" } } }, { 20 })
    same(starts { mode = "bus", no = { fare = true } }, { 5 })
end)

test("calendar times in filters are local texts or seconds", function()
    local net <close> = thole.network({ { "A", "B", "2031-01-04T06:20", "2031-01-04T07:00" },
        { "A", "B", "2031-01-04T08:20", "2031-01-04T09:30" } }, { zone = "Atlantic/Azores" })
    same(#net:keep { start = "2031-01-04T07:20Z" }, 1)
    same(#net:keep { start = { min = "2031-01-04T06:21" } }, 1)
    same(#net:keep { duration = { min = "1 h" } }, 1)
    same(#net:keep { start = 1925277600 }, 1) -- 2031-01-04T06:00:00Z is 1925272800; 07:20Z is 4,800 s later
end)

test("a missing attribute fails every comparison", function()
    same(starts { seats = { min = -1000 } }, { 0, 5, 20 })
    same(starts { no = { seats = { min = -1000 } } }, { 30 })
end)

test("views of views, and of the whole", function()
    local ferries = NET:keep { mode = "ferry" }
    same(#ferries:keep { seats = 91 }, 1)
    same(#ferries:drop(function(link) return link.start == 0 end), 1)
    same(#ferries:keep(function() return true end), 2)
    same(#ferries:keep(function() return nil end), 0)
    same(#NET, 4)
end)

test("mistakes in filters are named", function()
    local function refuse(text, filter)
        raises(text, function() NET:keep(filter) end)
    end
    refuse('net:keep takes a table, as in { mode = "ferry" }, or a function of a link, not a string', "ferry")
    refuse('filter of net:keep: a filter is empty: name a field, as in { mode = "ferry" }', {})
    refuse('filter of net:keep: a filter has names of fields, as in { mode = "ferry" }, not number keys',
        { "ferry" })
    refuse('filter of net:keep: field "seats" is compared with an empty table: give either a list of values or { min =, max = }',
        { seats = {} })
    refuse('filter of net:keep: field "seats" is compared with a mixed table: give either a list of values or { min =, max = }',
        { seats = { 1, min = 2 } })
    refuse('filter of net:keep: field "seats" has "mn", but knows min, max, or a list of values',
        { seats = { mn = 2 } })
    refuse('filter of net:keep: field "seats" is compared with a function: give a number, a text, a list, { min =, max = }, true or false',
        { seats = print })
    refuse('filter of net:keep: field "from" is compared with a number: give a name', { from = 1.5 })
    refuse('filter of net:keep: field "start": "dawn" is not a time: the network\'s times are plain numbers, write for example 12.5',
        { start = "dawn" })
    refuse('filter of net:keep: "any" takes a list of filters, as in { { mode = "ferry" }, { seats = 4 } }',
        { any = { mode = "bus" } })
    refuse('filter of net:keep: "all" takes a list of filters, not a string', { all = "bus" })
    refuse('filter of net:keep: a filter is a table, not a string', { any = { "bus" } })
    refuse('filter of net:keep: "no" has a list and other keys: give a list of filters',
        { no = { { mode = "bus" }, mode = "bus" } })
    local deep = { mode = "bus" }
    for _ = 1, 60 do deep = { no = deep } end
    refuse("filter of net:keep: filters stand in one another more than 50 deep", deep)
end)

test("a field that no link has, and a type that no value has, are errors", function()
    for _, filter in ipairs { { mod = "ferry" }, { seats = "many" }, { mode = 3 } } do
        local fine, why = pcall(NET.keep, NET, filter)
        t.truth(not fine and why:find(next(filter), 1, true), tostring(why))
    end
end)

test("an error in a filter function is raised as it is", function()
    local token = {}
    local fine, why = pcall(NET.keep, NET, function() error(token) end)
    same(fine, false)
    t.truth(rawequal(why, token), "that the error is the function's own")
    raises("seats of 0",
        function() NET:keep(function(link) if link.start == 5 then error("seats of 0") end end) end)
    raises('a link has no field "seat": did you mean "seats"?',
        function() NET:drop(function(link) return link.seat end) end)
    same(#NET:keep { mode = "ferry" }, 2) -- and the network is as it was
end)

test("a filter function may filter, and may close what it filters", function()
    local inner = 0
    same(#NET:keep(function() inner = inner + #NET:keep { mode = "bus" }; return true end), 4)
    same(inner, 8)
    local net = thole.network { { "A", "B", 0, 1 }, { "B", "C", 1, 2 } }
    same(#net:keep(function(link) net:close(); return link.start == 1 end), 1)
end)

-- A random filter, and the function that must agree with it.
local function random_filter(random, depth)
    local kind = random(depth > 2 and 5 or 8)
    if kind == 0 then
        local value = ("m%d"):format(random(4))
        return { mode = value }, function(l) return l.mode == value end
    elseif kind == 1 then
        local low = random(10)
        local high = low + random(5)
        return { load = { min = low, max = high } }, function(l) return l.load ~= nil and l.load >= low
            and l.load <= high end
    elseif kind == 2 then
        local present = random(2) == 0
        return { price = present }, function(l) return (l.price ~= nil) == present end
    elseif kind == 3 then
        local names = { ("n%d"):format(random(6)), ("n%d"):format(random(6)) }
        return { from = names }, function(l) return l.from == names[1] or l.from == names[2] end
    elseif kind == 4 then
        local low, half = random(20), random(8) / 2 + 0.25
        return { start = { min = low }, price = { max = half } },
            function(l) return l.start >= low and l.price ~= nil and l.price <= half end
    end
    local a, in_a = random_filter(random, depth + 1)
    local b, in_b = random_filter(random, depth + 1)
    if kind == 5 then return { any = { a, b } }, function(l) return in_a(l) or in_b(l) end end
    if kind == 6 then return { all = { a, b } }, function(l) return in_a(l) and in_b(l) end end
    return { no = a }, function(l) return not in_a(l) end
end

test("tables and functions agree on random networks", function()
    local seed = tonumber(os.getenv("SEED") or "") or 5404
    local random = t.random(seed)
    local kept_some = 0
    for round = 1, 40 do
        local events = {}
        for i = 1, 30 + random(200) do
            local from, to = random(6), random(6)
            events[i] = { ("n%d"):format(from), ("n%d"):format(to), random(40) }
            if random(3) > 0 then events[i].mode = ("m%d"):format(random(4)) end
            if random(3) > 0 then events[i].load = random(15) end
            events[i].price = random(4) > 0 and random(10) / 2 or i == 1 and 0.5 or nil
        end
        -- every column must be there to be asked about
        events[#events + 1] = { "n0", "n1", 0, mode = "m0", load = 0, price = 0.5 }
        local net <close> = thole.network(events)
        for _ = 1, 8 do
            local filter, asks = random_filter(random, 0)
            local by_table <close> = net:keep(filter)
            local by_function <close> = net:keep(asks)
            local rest <close> = net:drop(asks)
            local a, b = {}, {}
            for l in by_table:each() do a[#a + 1] = tostring(l) end
            for l in by_function:each() do b[#b + 1] = tostring(l) end
            same(a, b, ("seed %d, round %d, filter %s"):format(seed, round, t.show(filter)))
            same(#a + #rest, #net)
            if #a > 0 and #a < #net then kept_some = kept_some + 1 end
        end
    end
    t.truth(kept_some > 100, "that most filters tell links apart")
end)

test("a network of several blocks is asked in order", function()
    local events = {}
    for i = 1, 20000 do events[i] = { "A", "B" .. i % 7, i, i + 1 } end
    local net <close> = thole.network(events)
    local last, in_order = 0, true
    local odd <close> = net:keep(function(link)
        in_order, last = in_order and link.start == last + 1, link.start
        return link.start % 2 == 1
    end)
    same({ in_order, last, #odd }, { true, 20000, 10000 })
end)
