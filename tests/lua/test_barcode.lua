-- Barcodes worked out by hand, and what can be asked of them.

local thole = require "thole"
local t = require "harness"
local test, same, raises = t.test, t.same, t.raises

-- A loop A B C closes in the second of three windows; in the third only D E is left.
local NET = thole.network { { "A", "B", 0, 10 }, { "B", "C", 0, 10 }, { "C", "A", 5, 10 },
    { "D", "E", 10, 15 } }
local CUTS = thole.windows.sliding(NET, { length = 5 })

-- "dim first-last kind" of each bar.
local function shown(bars, choice)
    local out = {}
    for bar in bars:each(choice) do out[#out + 1] = ("%d %s-%s %s"):format(bar.dim, bar.first, bar.last,
        bar.kind) end
    return table.concat(out, ", ")
end

test("a loop that closes and goes", function()
    local bars <close> = NET:zigzag { windows = CUTS, radius = "graph" }
    same(shown(bars), "0 1-2.5 closed-closed, 0 2.5-3 closed-closed, 1 1.5-2.5 closed-closed")
    local loop
    for bar in bars:each { dim = 1 } do loop = bar end
    same(loop, { dim = 1, first = 1.5, last = 2.5, kind = "closed-closed", birth = 5, death = 10, opens = 0,
        closes = 15,
        lifespan = 5, join_only = false, index = 3 })
    same(#bars, 3)
    same({ bars.radius, bars.join, bars.dims, bars.nodes, bars.unit, bars.zone },
        { "graph", "union", { 0, 1 }, "linked", "s", nil })
    -- five places, and four links; each stays once
    same({ bars.cells[0], bars.cells[1], bars.cells[2] }, { 5, 4, nil })
    t.truth(bars.peak_bytes > 0, "that memory was used")
end)

test("at radius 1 the loop of three is filled", function()
    local bars <close> = NET:zigzag { windows = CUTS }
    same(shown(bars), "0 1-2.5 closed-closed, 0 2.5-3 closed-closed")
    same(bars.radius, 1)
    same(bars:betti(1), { 0, 0, 0 })
    same(bars.cells[2], 1)
end)

test("joins by intersection", function()
    local bars <close> = NET:zigzag { windows = CUTS, radius = "graph", join = "intersection" }
    same(bars.join, "intersection")
    -- the join of the second and third window is empty, so A B C dies by deletion and D E is born by addition
    same(shown(bars), "0 1-2 closed-closed, 0 3-3 closed-closed, 1 2-2 closed-closed")
end)

test("kinds: two pieces that merge, and part again", function()
    local net <close> = thole.network { { "A", "B", 0, 15 }, { "C", "D", 0, 15 }, { "B", "C", 5, 10 } }
    local bars <close> = net:zigzag { windows = thole.windows.sliding(net, { length = 5 }), dims = { 0 } }
    same(shown(bars), "0 1-1 closed-open, 0 1-3 closed-closed, 0 3-3 open-closed")
    same(bars:betti(0), { 2, 1, 2 })
    same(bars:betti(0, { joins = true }), { 2, 1, 1, 1, 2 })
    same({ bars:count { kind = "closed-open" }, bars:count { kind = "open-open" }, bars:count() },
        { 1, 0, 3 })
end)

test("a loop that is in no window is marked", function()
    local net <close> = thole.network { { "A", "B", 0, 5 }, { "B", "C", 0, 5 }, { "C", "A", 5, 10 } }
    local bars <close> = net:zigzag { windows = thole.windows.sliding(net, { length = 5 }), radius = "graph",
        dims = { 1 } }
    local out = {}
    for bar in bars:each() do out[#out + 1] = bar end
    same(out, { { dim = 1, first = 1.5, last = 1.5, kind = "closed-closed", birth = 5, death = 5, opens = 0,
        closes = 10,
        lifespan = 0, join_only = true, index = 1 } })
    same(bars:betti(1), { 0, 0 })
end)

test("centres are exact to a quarter of a tick", function()
    local net <close> = thole.network { { "A", "B", 0, 3e-9 }, { "B", "C", 1e-9, 3e-9 } }
    local cuts = thole.windows.list(net, { { 0, 1e-9 }, { 1e-9, 3e-9 } })
    local bars <close> = net:zigzag { windows = cuts, dims = { 0 }, nodes = "all" }
    -- all of A, B, C from the start: C joins the others in the union of both windows
    same(shown(bars), "0 1-1 closed-open, 0 1-2 closed-closed")
    same({ bars:text(1, "birth"), bars:text(1, "death"), bars:text(2, "death") },
        { "0.0000000005", "0.0000000005", "0.000000002" })
    same({ bars:text(2, "opens"), bars:text(2, "closes"), bars:text(2, "first"), bars:text(2, "last") },
        { "0", "0.000000003", "1", "2" })
    local loop <close> = thole.network { { "A", "B", 0, 1e-9 }, { "B", "C", 0, 1e-9 },
        { "C", "A", 1e-9, 3e-9 } }
    local only <close> = loop:zigzag { windows = cuts, radius = "graph", dims = { 1 } }
    -- the mean of 0.5 and 2
    same({ only:text(1, "birth"), only:text(1, "first") }, { "0.00000000125", "1.5" })
    for bar in only:each() do same({ bar.birth, bar.opens, bar.closes }, { 1.25e-9, 0, 3e-9 }) end
end)

test("calendar bars have local times", function()
    local net <close> = thole.network({ { "A", "B", "2031-01-04T06:00", "2031-01-04T08:00" } },
        { zone = "Atlantic/Azores" })
    local bars <close> = net:zigzag { windows = thole.windows.sliding(net, { length = "1 h" }), dims = { 0 } }
    for bar in bars:each() do
        same({ bar.birth, bar.death, bar.opens, bar.closes, bar.lifespan }, { "2031-01-04T06:30:00-01:00",
            "2031-01-04T07:30:00-01:00", "2031-01-04T06:00:00-01:00", "2031-01-04T08:00:00-01:00", 3600 })
    end
    same({ bars.zone, bars:text(1, "birth") }, { "Atlantic/Azores", "2031-01-04T06:30:00-01:00" })
    same(bars:count { shortest_lifespan = "1 h" }, 1)
    same(bars:count { shortest_lifespan = "61 min" }, 0)
end)

-- Ten links apart from one another, link i active for i.
local function staircase()
    local events = {}
    for i = 1, 10 do events[i] = { "a" .. i, "b" .. i, i, 2 * i } end
    return thole.network(events)
end

test("the longest, the longest first, equally long ones in order", function()
    local net <close> = staircase()
    local bars <close> = net:zigzag { windows = thole.windows.sliding(net, { length = 1 }), dims = { 0 } }
    local spans = {}
    for bar in bars:each { longest = 3 } do spans[#spans + 1] = bar.lifespan end
    -- from the join before to the join after, but the last link has no join after it
    same(spans, { 9.5, 9, 8 })
    local all, last = 0, math.huge
    for bar in bars:each { longest = 100 } do
        all = all + 1
        t.truth(bar.lifespan <= last, "that lifespans descend")
        last = bar.lifespan
    end
    same(all, 10)
    local twins <close> = thole.network { { "A", "B", 0, 2 }, { "C", "D", 0, 2 }, { "E", "F", 0, 1 },
        { "G", "H", 1, 2 } }
    local even <close> = twins:zigzag { windows = thole.windows.sliding(twins, { length = 1 }), dims = { 0 } }
    local order = {}
    for bar in even:each { longest = 4 } do order[#order + 1] = bar.index end
    local lifespans = {}
    for bar in even:each() do lifespans[bar.index] = bar.lifespan end
    for k = 2, 4 do
        local a, b = order[k - 1], order[k]
        t.truth(lifespans[a] > lifespans[b] or (lifespans[a] == lifespans[b] and a < b),
            "the order of equal ones")
    end
    same({ even:count { longest = 2 }, even:count { longest = 9 } }, { 2, 4 })
end)

test("choosing agrees with looking at every bar", function()
    local random = t.random(77)
    local events = {}
    for i = 1, 300 do events[i] = { "n" .. random(12), "m" .. random(12), random(60),
        0 } events[i][4] = events[i][3] + random(9) end
    local net <close> = thole.network(events)
    local bars <close> = net:zigzag { windows = thole.windows.sliding(net, { length = 4, overlap = 0.5 }),
        radius = "graph" }
    t.truth(#bars > 100, "that there is something to choose from")
    for round = 1, 60 do
        local choice = {}
        if random(2) == 0 then choice.dim = random(2) end
        if random(2) == 0 then choice.kind = ({ "closed-open", "open-closed", "closed-closed",
            "open-open" })[random(4) + 1] end
        if random(2) == 0 then choice.shortest_lifespan = random(12) / 2 end
        if random(2) == 0 then choice.at = 1 + random(2 * #bars.windows - 1) / 2 end
        local wanted = {}
        for bar in bars:each() do
            if (not choice.dim or bar.dim == choice.dim) and (not choice.kind or bar.kind == choice.kind)
                and (not choice.shortest_lifespan or bar.lifespan >= choice.shortest_lifespan)
                and (not choice.at or (bar.first <= choice.at and choice.at <= bar.last)) then
                wanted[#wanted + 1] = bar
            end
        end
        if random(2) == 0 then
            choice.longest = 1 + random(20)
            table.sort(wanted, function(a, b)
                if a.lifespan ~= b.lifespan then return a.lifespan > b.lifespan end
                return a.index < b.index
            end)
            for i = #wanted, choice.longest + 1, -1 do wanted[i] = nil end
        end
        local got = {}
        for bar in bars:each(choice) do got[#got + 1] = bar end
        same(got, wanted, ("round %d, choice %s"):format(round, t.show(choice)))
        same(bars:count(choice), #wanted)
    end
end)

test("Betti numbers are bars alive", function()
    local bars <close> = NET:zigzag { windows = CUTS, radius = "graph" }
    for dim = 0, 1 do
        for i, number in ipairs(bars:betti(dim)) do same(number, bars:count { dim = dim, at = i }) end
        for i, number in ipairs(bars:betti(dim, { joins = true })) do same(number,
            bars:count { dim = dim, at = (i + 1) / 2 }) end
    end
end)

test("windows inside one another can make a lifespan negative", function()
    local net <close> = thole.network { { "A", "B", 0, 100 } }
    local cuts = thole.windows.list(net, { { 0, 100 }, { 1, 2 } })
    local bars <close> = net:zigzag { windows = cuts, dims = { 0 } }
    for bar in bars:each() do same({ bar.birth, bar.death, bar.lifespan, bar.closes },
        { 50, 1.5, -48.5, 2 }) end
    same(bars:count { shortest_lifespan = 0 }, 0)
end)

test("the windows of a barcode", function()
    local cuts = thole.windows.list(NET, { { 0, 5, "early" }, { 5, 15, "late" } })
    local bars <close> = NET:zigzag { windows = cuts }
    cuts:close()
    same({ #bars.windows, bars.windows[2].label, bars.windows[2].finish }, { 2, "late", 15 })
    bars.windows:close()
    same(#bars.windows, 2)
end)

test("any length of block and number of threads gives the same bars", function()
    local net <close> = staircase()
    local cuts = thole.windows.sliding(net, { length = 2, overlap = 0.5 })
    local wanted = shown(net:zigzag { windows = cuts, radius = 2 })
    for _, block in ipairs { 1, 2, 3, 7, 1000 } do
        same(shown(net:zigzag { windows = cuts, radius = 2, block = block }), wanted)
    end
end)

test("memory: a ceiling that is too low says what to do", function()
    local events, random = {}, t.random(5)
    for i = 1, 3000 do events[i] = { "n" .. random(90), "m" .. random(90), random(50), 60 } end
    local net <close> = thole.network(events)
    local cuts = thole.windows.sliding(net, { length = 5 })
    local fine, why = pcall(net.zigzag, net, { windows = cuts, radius = 2, max_memory = "1 MB" })
    t.truth(not fine and why:find("memory", 1, true) and why:find("lower", 1, true), tostring(why))
    t.truth(#net:zigzag { windows = cuts, radius = "graph", max_memory = "1 GiB" } > 0,
        "that a later call has its own ceiling")
    t.truth(#net:zigzag { windows = cuts, radius = "graph", max_memory = 500000000 } > 0,
        "that bytes are a number too")
end)

test("mistakes in zigzag are named", function()
    local function refuse(text, opts)
        raises(text, function() NET:zigzag(opts) end)
    end
    refuse('option "windows" of net:zigzag is missing: make windows with thole.windows.sliding, list or by',
        nil)
    refuse('option "windows" of net:zigzag takes windows, not a number: make them with thole.windows.sliding, list or by', { windows = 5 })
    refuse('unknown option "raduis" of net:zigzag: did you mean "radius"?', { windows = CUTS, raduis = 1 })
    refuse('option "radius" of net:zigzag is "graph" or a whole number of hops, not "grph"',
        { windows = CUTS, radius = "grph" })
    refuse('option "radius" of net:zigzag is a whole number, not 1.5', { windows = CUTS, radius = 1.5 })
    refuse('option "radius" of net:zigzag is "graph" or a whole number of hops, not a boolean',
        { windows = CUTS, radius = true })
    refuse('option "dims" of net:zigzag is a list of dimensions, as in { 0, 1 }, not a number',
        { windows = CUTS, dims = 1 })
    refuse('option "dims" of net:zigzag has 8 in it: give whole numbers from 0 to 7',
        { windows = CUTS, dims = { 8 } })
    refuse('option "dims" of net:zigzag is empty: give dimensions, as in { 0, 1 }',
        { windows = CUTS, dims = {} })
    refuse('option "join" of net:zigzag has no choice "onion": did you mean "union"?',
        { windows = CUTS, join = "onion" })
    refuse('option "nodes" of net:zigzag has no choice "none": known are linked, all',
        { windows = CUTS, nodes = "none" })
    refuse('option "block" of net:zigzag is 0: give 1 to 4294967295', { windows = CUTS, block = 0 })
    refuse('option "max_memory" of net:zigzag: "much" is not an amount of memory: write for example "8 GB"',
        { windows = CUTS, max_memory = "much" })
    refuse('option "max_memory" of net:zigzag: "8 gb" is not an amount of memory: write for example "8 GB"',
        { windows = CUTS, max_memory = "8 gb" })
    local calendar <close> = thole.network { { "A", "B", "2031-01-04T06:00Z", "2031-01-04T08:00Z" } }
    raises("these windows are in other times than the network: make them from the same network", function()
        calendar:zigzag { windows = CUTS }
    end)
end)

test("mistakes in questions are named", function()
    local bars = NET:zigzag { windows = CUTS, dims = { 0 } }
    raises('unknown option "longst" of bars:each: did you mean "longest"?',
        function() bars:each { longst = 1 } end)
    raises('option "longest" of bars:each is 0: give 1 to 9223372036854775807',
        function() bars:each { longest = 0 } end)
    raises('option "dim" of bars:count is 1, which was not computed: ask for it in dims of net:zigzag',
        function()
        bars:count { dim = 1 }
    end)
    raises('option "at" of bars:count is a window from 1 to 3, or the half between two, not 3.5',
        function() bars:count { at = 3.5 } end)
    raises('option "at" of bars:count is a window from 1 to 3, or the half between two, not 1.25',
        function() bars:count { at = 1.25 } end)
    raises('option "kind" of bars:count has no choice "closed": did you mean "closed-open"?',
        function() bars:count { kind = "closed" } end)
    raises("there is no bar 3: this barcode has 2", function() bars:text(3, "birth") end)
    raises('bars:text knows no field "brith": did you mean "birth"?', function() bars:text(1, "brith") end)
    raises("bars:betti takes a dimension from 0 to 7, not 9", function() bars:betti(9) end)
    raises('a barcode has no field "bety": did you mean "betti"?', function() local _ = bars.bety end)
    raises("bars:count takes a barcode, not a table: call it with a colon, as in bars:each()",
        function() bars.count({}) end)
    local fine, why = pcall(bars.betti, bars, 1)
    t.truth(not fine and why:find("dimension 1 was not computed", 1, true), tostring(why))
    same(tostring(bars), "barcode of 2 bars")
end)

test("carriers name the places that a bar runs through", function()
    -- A square in window 1; in window 2 its side C–D is gone and E hangs on it: no loop, one piece.
    local net <close> = thole.network { { "A", "B", 0, 20 }, { "B", "C", 0, 20 }, { "C", "D", 0, 10 }, { "D", "A", 0, 20 },
        { "B", "E", 10, 20 } }
    local cuts = thole.windows.sliding(net, { length = 10 })
    local bars <close> = net:zigzag { windows = cuts, radius = "graph" }
    local loops = bars:carriers(net, { at = 1 })
    same(#loops, 1)
    same(#loops[1].parts, 1)
    local names = table.concat(loops[1].parts[1])
    t.truth(("ABCDABCD"):find(names, 1, true) or ("DCBADCBA"):find(names, 1, true), "a walk round the square: " .. names)
    same(#bars:carriers(net, { at = 1.5 }), 1)
    same(#bars:carriers(net, { at = 2 }), 0)
    local pieces = bars:carriers(net, { at = 2, dim = 0 })
    same(#pieces, 1)
    same(pieces[1].parts, { { "A", "B", "C", "D", "E" } })
    local other <close> = thole.network { { "A", "B", 0, 20 }, { "X", "Y", 0, 20 } }
    raises("the barcode is of another network: ask with the network that it was computed from",
        function() bars:carriers(other, { at = 1, dim = 0 }) end)
    raises('option "at" of bars:carriers is missing: give a window\'s number, or the half between two',
        function() bars:carriers(net) end)
    raises('option "dim" of bars:carriers is 2: give 0 to 1', function() bars:carriers(net, { at = 1, dim = 2 }) end)
end)
