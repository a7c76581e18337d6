-- Times and durations go in and come out exactly.

local thole = require "thole"
local t = require "harness"
local test, same, raises = t.test, t.same, t.raises

-- Start, finish and duration of one link on a plain clock, or with options.
local function through(start, finish, opts)
    local net <close> = thole.network({ { "A", "B", start, finish } }, opts)
    local next_link = net:each()
    local link = next_link()
    return link.start, link.finish, link.duration
end

test("plain numbers come back as they went in", function()
    for _, x in ipairs { 0, 5, -3, 9223372036, -9223372036 } do same(through(x), x) end
    for _, x in ipairs { 0.1, 0.25, 1.5, -1.25, 123456.789, 0.123456789, 1e-9,
        1700000000.25 } do same(through(x), x) end
end)

test("a whole number is an integer, however it was written", function()
    same(through(5.0), 5)
    same(through("5.000"), 5)
    same(through("2e3"), 2000)
end)

test("a duration is the difference of decimals, not of floats", function()
    local _, _, lasting = through(0.1, 0.3)
    same(lasting, 0.2) -- 0.3 - 0.1 as floats is 0.19999999999999998
end)

test("a sum that is a hair beside a decimal is that decimal", function()
    same(through(0.1 + 0.2), 0.3)
end)

test("what ticks cannot hold is refused", function()
    raises("event 1: start: time 1e-10 is finer than 10^-9 of the unit: round it",
        function() thole.network { { "A", "B", 1e-10 } } end)
    raises('event 1: start: time "0.0000000001" is finer than 10^-9 of the unit: round it', function()
        thole.network { { "A", "B", "0.0000000001" } }
    end)
    raises("event 1: start: time 9223372037 is out of range",
        function() thole.network { { "A", "B", 9223372037 } } end)
    raises("event 1: start: time -9223372037 is out of range",
        function() thole.network { { "A", "B", -9223372037 } } end)
    raises("event 1: start: time 1e+300 is out of range",
        function() thole.network { { "A", "B", 1e300 } } end)
    raises("event 1: start: time inf is out of range", function() thole.network { { "A", "B", 1 / 0 } } end)
    raises("event 1: finish: a time is a text or a number, not a boolean",
        function() thole.network { { "A", "B", 1, true } } end)
    raises('event 1: start: "soon" is not a time: the network\'s times are plain numbers, write for example 12.5', function()
        thole.network { { "A", "B", "soon" } }
    end)
end)

test("decimals of any size come back as the nearest float", function()
    local random = t.random(20310504)
    for _ = 1, 3000 do
        local whole = random(2) == 0 and random(1000) or random(9223372036)
        local text = ("%s%d.%09d"):format(random(2) == 0 and "-" or "", whole, random(999999999) + 1)
        local start = through(text)
        t.truth(start == tonumber(text), ("the time %s, which became %.17g,"):format(text, start))
    end
end)

test("calendar times are local text, and any of three forms", function()
    local azores = { zone = "Atlantic/Azores" } -- one hour behind UTC in winter, level with it in summer
    same(through("2031-01-04T06:20", nil, azores), "2031-01-04T06:20:00-01:00")
    same(through("2031-05-04T06:20", nil, azores), "2031-05-04T06:20:00+00:00")
    same(through("2031-01-04T06:20Z", nil, azores), "2031-01-04T05:20:00-01:00")
    same(through(0, nil, azores), "1969-12-31T23:00:00-01:00")
    same(through(1.5, nil, { zone = "UTC" }), "1970-01-01T00:00:01.5+00:00")
    local _, _, lasting = through("2031-01-04T06:20", "2031-01-04T07:50", azores)
    same(lasting, 5400)
end)

test("without zone and unit the first start tells the kind of clock", function()
    same(through("2031-01-04T06:20:00+01:00"), "2031-01-04T05:20:00Z")
    same(through("20310104"), 20310104) -- a number first, a date only if it is none
    same(through("20310104T0620"), "2031-01-04T06:20:00Z")
    raises('event 1: start: "noon" is not a time: write for example "2031-05-04T06:20", or seconds since 1970-01-01T00:00:00Z as a number',
        function() thole.network({ { "A", "B", "noon" } }, { zone = "Atlantic/Azores" }) end)
end)

test("durations are texts with units or numbers of the clock's unit", function()
    local net <close> = thole.network { { "A", "B", 0, 86400 } }
    local function windows(length) return #thole.windows.sliding(net, { length = length }) end
    same(windows("1 h 30 min"), 16)
    same(windows("1.5 h"), 16)
    same(windows(5400), 16)
    same(windows("0.5 d"), 2)
    same(windows(86400.0), 1)
    raises('option "length" of thole.windows.sliding: "20 mim" is not a duration: write for example "20 min" or "1 h 30 min"',
        function() thole.windows.sliding(net, { length = "20 mim" }) end)
    raises('option "length" of thole.windows.sliding: duration -1 is out of range', function()
        thole.windows.sliding(net, { length = -1 })
    end)
    raises('option "length" of thole.windows.sliding: a duration is a text or a number, not a table',
        function()
        thole.windows.sliding(net, { length = {} })
    end)
    local km <close> = thole.network({ { "A", "B", 0, 100 } }, { unit = "km" })
    same(#thole.windows.sliding(km, { length = "25 km" }), 4)
    raises('option "length" of thole.windows.sliding: "1 h" is not a duration: write a number of km',
        function()
        thole.windows.sliding(km, { length = "1 h" })
    end)
end)
