-- Closing, collecting, and what stays alive as long as it is needed.

local thole = require "thole"
local native = require "thole.native"
local t = require "harness"
local test, same, raises = t.test, t.same, t.raises

local function some_network(n)
    local events = {}
    for i = 1, n do events[i] = { "a" .. i % 7, "b" .. i % 5, i, i + 3, load = i } end
    return thole.network(events)
end

test("closing twice is closing", function()
    local net = some_network(10)
    local cuts = thole.windows.sliding(net, { length = 5 })
    local bars = net:zigzag { windows = cuts }
    for _, thing in ipairs { net, cuts, bars } do
        thing:close()
        thing:close()
    end
    same({ tostring(net), tostring(cuts), tostring(bars) },
        { "closed network", "closed windows", "closed barcode" })
end)

test("use after close is an error that says so", function()
    local net = some_network(10)
    local cuts = thole.windows.sliding(net, { length = 5 })
    local bars = net:zigzag { windows = cuts }
    local links, each_bar, each_window = net:each(), bars:each(), cuts:each()
    net:close()
    cuts:close()
    bars:close()
    raises("this network is closed: net:keep comes too late", function() net:keep { load = 1 } end)
    raises("this network is closed: net:each comes too late", function() for _ in net:each() do end end)
    raises("this network is closed: net:summary comes too late", function() net:summary() end)
    raises("this network is closed: net:zigzag comes too late", function() net:zigzag {} end)
    raises("this network is closed: columns comes too late", function() local _ = net.columns end)
    raises("this network is closed: # comes too late", function() local _ = #net end)
    raises("this network is closed: thole.windows.sliding comes too late",
        function() thole.windows.sliding(net, { length = 1 }) end)
    raises("these windows are closed: # comes too late", function() local _ = #cuts end)
    raises("these windows are closed: w[i] comes too late", function() local _ = cuts[1] end)
    raises("these windows are closed: windows:each comes too late", function() each_window() end)
    raises("this barcode is closed: bars:count comes too late", function() bars:count() end)
    raises("this barcode is closed: bars:each comes too late", function() each_bar() end)
    raises("this barcode is closed: windows comes too late", function() local _ = bars.windows end)
    -- a loop that has begun holds its links
    local n = 0
    for _ in links do n = n + 1 end
    same(n, 10)
    local other = some_network(3)
    raises("these windows are closed: option \"windows\" of net:zigzag comes too late",
        function() other:zigzag { windows = cuts } end)
end)

test("a view outlives what it was made from", function()
    local view, cuts
    do
        local net <close> = some_network(100)
        view, cuts = net:keep { load = { min = 91 } }, thole.windows.sliding(net, { length = 5 })
    end
    local bars = view:zigzag { windows = cuts }
    local count = #bars
    collectgarbage()
    same(#view, 10)
    for link in view:each() do t.truth(link.load >= 91, "the filter") end
    view:close()
    cuts:close()
    collectgarbage()
    same(#bars, count)
    for bar in bars:each() do t.truth(bar.first <= bar.last, "the order of positions") end
end)

test("<close> closes, at the end and on an error", function()
    local kept
    do
        local net <close> = some_network(5)
        kept = net
    end
    same(tostring(kept), "closed network")
    pcall(function()
        local net <close> = some_network(5)
        kept = net
        error("out")
    end)
    same(tostring(kept), "closed network")
end)

-- Kilobytes of this process: resident, and of address space.
local function kilobytes(what)
    for line in io.lines("/proc/self/status") do
        local size = line:match("^" .. what .. ":%s+(%d+) kB")
        if size then return tonumber(size) end
    end
end

-- An address sanitizer keeps freed memory for a while, and reserves terabytes: there, only the core's own count
-- is looked at.
local INSTRUMENTED = kilobytes("VmSize") > 1000000000

-- Do f `times` times: neither the core's memory nor the process may grow by more than `kilobytes`.
local function stays_small(times, limit, f)
    collectgarbage()
    collectgarbage()
    local core, process, most, most_lua = native.memory(), kilobytes("VmRSS"), 0, 0
    for _ = 1, times do
        f()
        most, most_lua = math.max(most, (native.memory())), math.max(most_lua, collectgarbage("count"))
    end
    t.truth(most - core < limit * 1000,
        ("that the core's memory does not grow: %d bytes at first, then %d"):format(core, most))
    t.truth(most_lua < 40000, ("that Lua's memory does not grow: %d kB"):format(most_lua // 1))
    local now = kilobytes("VmRSS")
    t.truth(INSTRUMENTED or now - process < limit,
        ("that the process does not grow: %d kB at first, %d kB now"):format(process, now))
end

test("networks that are dropped in a loop are collected in time", function()
    local big = some_network(20000)
    t.truth(big:summary().bytes > 500000, "that a network takes memory that Lua does not see")
    -- 2,000 views of 80 kB are 160 MB
    stays_small(2000, 10000, function() big:keep(function() return true end) end)
end)

test("networks made anew, barcodes, windows and choices too", function()
    local events = {}
    for i = 1, 4000 do events[i] = { "a" .. i % 50, "b" .. i % 40, i, i + 20 } end
    stays_small(100, 20000, function()
        local fresh = thole.network(events)
        thole.windows.sliding(fresh, { length = 1e-3, start = 0, finish = 20 })
        local bars = fresh:zigzag { windows = thole.windows.sliding(fresh, { length = 10 }),
            radius = "graph" }
        for _ = 1, 5 do bars:each { longest = 100 } end
    end)
end)

test("a collector that is stopped stays stopped", function()
    collectgarbage()
    collectgarbage("stop")
    local gone = false
    setmetatable({}, { __gc = function() gone = true end })
    for _ = 1, 20 do some_network(500) end
    local was_gone = gone
    collectgarbage("restart")
    same(was_gone, false)
end)

test("coroutines share the state", function()
    local net = some_network(20)
    local seen = {}
    local function reader(name)
        return coroutine.wrap(function()
            for link in net:each() do
                seen[#seen + 1] = name .. link.load
                if link.load == 3 then return end
                coroutine.yield()
            end
        end)
    end
    local a, b = reader("a"), reader("b")
    for _ = 1, 3 do
        a()
        b()
    end
    same(table.concat(seen, " "), "a1 b1 a2 b2 a3 b3")
end)

test("a yield inside a filter function is refused, not a crash", function()
    local net = some_network(5)
    local co = coroutine.create(function() net:keep(function() coroutine.yield() end) end)
    local fine, why = coroutine.resume(co)
    same(fine, false)
    t.truth(tostring(why):find("yield across a C-call boundary", 1, true), tostring(why))
    same(#net, 5)
end)
