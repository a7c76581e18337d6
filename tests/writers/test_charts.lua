-- Charts and tables hold the numbers they were given: read back from what is written, and recomputed
-- another way.

package.path = "tests/writers/?.lua;" .. package.path
local check = require "check"
check.without_core()
local stand_in = require "stand_in"
local axis = require "thole.svg_axis"
local escape = require "thole.escape"
local moments = require "thole.moments"
local stretches = require "thole.report.stretches"
local write = require "thole.write"

local function sliding(start, length, step, n)
    local list = {}
    for i = 0, n - 1 do list[#list + 1] = { start + i * step, start + i * step + length } end
    return list
end

-- ---- tables -------------------------------------------------------------------------------------

local plain = stand_in.windows(sliding(0, 10, 5, 4))
local bars = stand_in.barcode(plain, { { 0, 1, 4, "closed-closed" }, { 1, 1.5, 3, "closed-open" } })
write("a.csv", bars)
check.equal(check.files["a.csv"], "dim,first,last,kind,birth,death,opens,closes\n" ..
    "0,1,4,closed-closed,5.0,20.0,0,25\n1,1.5,3,closed-open,7.5,15.0,0,20\n")
write("a.jsonl", bars)
check.equal(check.files["a.jsonl"]:match("\n(.-)\n"),
    '{"dim":1,"first":1.5,"last":3,"kind":"closed-open","birth":7.5,"death":15.0,"opens":0,"closes":20}')

local calendar = stand_in.windows(sliding(1930266000, 3600, 1800, 3), function() return -3600 end)
write("b.jsonl", stand_in.barcode(calendar, { { 0, 1, 1, "closed-closed" } }))
check.equal(check.files["b.jsonl"], '{"dim":0,"first":1,"last":1,"kind":"closed-closed",' ..
    '"birth":"2031-03-03T00:30:00-01:00","death":"2031-03-03T00:30:00-01:00",' ..
    '"opens":"2031-03-03T00:00:00-01:00","closes":"2031-03-03T01:00:00-01:00"}\n')

write("t.csv", { columns = { "a", "b,c" }, rows = { { 1, 'x"y' }, { nil, true }, { 0.1 } } })
check.equal(check.files["t.csv"], 'a,"b,c"\n1,"x""y"\n,true\n0.1,\n')
write("t.jsonl", { columns = { "a", "b" }, rows = { { 1, 'x"y' }, { nil, true } } })
check.equal(check.files["t.jsonl"], '{"a":1,"b":"x\\"y"}\n{"a":null,"b":true}\n')
write("one.csv", { columns = { "a" }, rows = { {}, { 1 } } })
check.equal(check.files["one.csv"], 'a\n""\n1\n', "a lone empty field is not a blank line")
write("n.csv", stand_in.network({ { "A", "B, C", 1, 2, seats = 4 }, { "A", "D", 2, 3 } }, { "seats" }))
check.equal(check.files["n.csv"], 'from,to,start,finish,seats\nA,"B, C",1,2,4\nA,D,2,3,\n')
write("w.csv", plain)
check.equal(check.files["w.csv"]:match("^(.-\n.-\n)"), "start,finish,label\n0,10,\n")
write("words.md", "# As it is\n")
check.equal(check.files["words.md"], "# As it is\n")
write("own.xyz", bars, { format = function(thing, out) out:write(#thing, " bars") end })
check.equal(check.files["own.xyz"], "2 bars")

-- What goes wrong is refused, and leaves no file.
check.fails(function() write("c.xyz", bars) end, ".csv, .jsonl or .svg")
check.fails(function() write("c.csv", 12) end, "can not be written")
check.fails(function() write("c.svg", plain) end, "an SVG file shows a barcode")
check.fails(function() write("c.svg", bars, { vew = "diagram" }) end, 'did you mean "view"?')
check.fails(function() write("c.svg", bars, { view = "map" }) end, 'there is no view "map"')
check.fails(function() write("c.svg", bars, { dim = 2 }) end, "dimension 2 is not among those of this "
    .. "barcode, 0, 1")
check.fails(function() write("c.svg", bars, { view = "diagram", dim = 3 }) end, "dimension 3 is not among")
check.fails(function() write("c.svg", bars, { dim = "1" }) end, 'option "dim" of thole.write must be a '
    .. 'number')
check.fails(function() write(7, bars) end, "must be text, not a number")
check.fails(function() write("c.csv", { columns = { "a" }, rows = { { {} } } }) end, "a table cannot "
    .. "stand in a table")
check.fails(function() write("c.jsonl", { columns = { "a" }, rows = { { 1 }, { 0 / 0 } } }) end,
    "JSON has no number for")
check.fails(function() write("c.csv", bars, { format = function() error("of mine", 0) end }) end, "of mine")
check.equal(check.files["c.csv"], nil)
check.equal(check.files["c.jsonl"], nil)

-- ---- the axis -----------------------------------------------------------------------------------

-- The Azores put their clocks forward on the last Sunday of March at 01:00 UTC (from the zone's rules as
-- published by IANA): on 2031-03-30 the local time after 23:59:59 is 01:00:00, so midnight never comes. On
-- 2031-10-26 at 01:00 UTC they go back from 01:00 to 00:00: midnight comes twice.
local JUMP = os.time { year = 2031, month = 3, day = 30, hour = 1, isdst = false } -- TZ of tests is UTC
if os.date("%z") ~= "+0000" then error("run the tests with TZ=UTC") end
local function azores_spring(t) return t < JUMP and -3600 or 0 end
local days = stand_in.windows(sliding(JUMP - 30 * 3600, 3600, 1800, 120), azores_spring)
local scale = axis.over(days, "Atlantic/Azores")
local found = {}
for _, tick in ipairs(scale.ticks) do
    if tick.day then found[tick.upper] = tick.at end
end
check.equal(found.Sat, JUMP - 24 * 3600)
check.equal(found.Sun, JUMP, "a midnight that never came")
check.equal(found.Mon, JUMP + 23 * 3600, "a Sunday of 23 hours")
check.equal(scale:name(JUMP - 60), "Sat 29 Mar 23:59")
check.equal(scale:name(JUMP), "Sun 30 Mar 01:00")

local BACK = os.time { year = 2031, month = 10, day = 26, hour = 1, isdst = false }
local function azores_autumn(t) return t < BACK and 0 or -3600 end
local autumn = axis.over(stand_in.windows(sliding(BACK - 30 * 3600, 3600, 1800, 120), azores_autumn),
    "Atlantic/Azores")
for _, tick in ipairs(autumn.ticks) do
    if tick.upper == "Sun" then check.equal(tick.at, BACK - 3600, "the first of two midnights") end
    if tick.upper == "Mon" then check.equal(tick.at, BACK + 24 * 3600, "a Sunday of 25 hours") end
end
check.equal(autumn:caption(), "local time in Atlantic/Azores, 2031")

for _, span in ipairs { 0.003, 1, 7, 60, 1234.5, 86400, 3e9 } do
    local numbers = axis.over(stand_in.windows { { 100, 100 + span } }, nil, "h")
    check.truthy(#numbers.ticks >= 2 and #numbers.ticks <= 8, "ticks for a span of " .. span .. ": "
        .. #numbers.ticks)
    for _, tick in ipairs(numbers.ticks) do
        check.near(tonumber(tick.upper), tick.at, 1e-9 * math.abs(tick.at), "a tick's label")
        check.truthy(tick.at >= numbers.low and tick.at <= numbers.high, "a tick outside")
    end
end

-- ---- barcode and diagram ------------------------------------------------------------------------

local function attribute(text, name)
    return tonumber((text:match("%f[%w]" .. name .. '="([%d.-]+)%%?"')))
end

local SHAPES = { post = "closed", ring = "open" }

for _ = 1, check.cases(20) do
    local n = check.random(2, 40)
    local windows = stand_in.windows(sliding(check.random(0, 1000), 20, 10, n))
    local barcode = stand_in.barcode(windows, stand_in.random_bars(check.random, n, check.random(0, 60)))
    write("r.svg", barcode)
    local text = check.files["r.svg"]
    local low, high = windows[1].start, windows[n].finish
    -- Every bar is drawn once, where its times are, with the ends of its kind.
    local wanted, got = {}, {}
    for _, bar in ipairs(barcode.list) do
        local function percent(time) return escape.decimal(100 * ((time - low) / (high - low)), 3) end
        local key = ("%s %s %s"):format(percent(bar.numbers[1]), percent(bar.numbers[2]), bar.kind)
        wanted[key] = (wanted[key] or 0) + 1
    end
    local kind, drawn = nil, {}
    for line in text:gmatch("[^\n]+") do
        local first, last = line:match('marker%-start="url%(#[%w-]+%-(%a+)%)" '
            .. 'marker%-end="url%(#[%w-]+%-(%a+)%)"')
        if first then kind = SHAPES[first] .. "-" .. SHAPES[last] end
        if line:find("<line", 1, true) and line:find("<title>", 1, true) then
            local x1, x2, y = attribute(line, "x1"), attribute(line, "x2"), attribute(line, "y1")
            local key = ("%s %s %s"):format(escape.number(x1), escape.number(x2), kind)
            got[key] = (got[key] or 0) + 1
            drawn[#drawn + 1] = { x1, x2, y }
        end
    end
    check.equal(#drawn, #barcode.list, "bars drawn")
    for key, count in pairs(wanted) do check.equal(got[key], count, "bar at " .. key) end
    for i, a in ipairs(drawn) do
        for j = i + 1, #drawn do
            local b = drawn[j]
            if a[3] == b[3] then check.truthy(a[2] < b[1] or b[2] < a[1], "two bars of a row overlap") end
        end
    end
    -- The diagram counts every bar of its dimension in exactly one mark, above or on the diagonal.
    write("d.svg", barcode, { view = "diagram", dim = 1 })
    local count = 0
    for mark in check.files["d.svg"]:gmatch("<use.-</use>") do
        count = count + tonumber(mark:match("<title>(%d+)"))
        check.truthy(attribute(mark, "x") + attribute(mark, "y") <= 100.002, "a mark below the diagonal")
    end
    check.equal(count, barcode:count { dim = 1 }, "bars in the diagram")
end

-- A bar of one join is marked; a name that wants to be markup stays text.
local odd = stand_in.barcode(plain, { { 1, 1.5, 1.5, "closed-closed" } }, { unit = "<b>&" })
write("odd.svg", odd)
check.truthy(check.files["odd.svg"]:find('class="passing"', 1, true))
check.truthy(not check.files["odd.svg"]:find("<b>", 1, true)
    and check.files["odd.svg"]:find("&lt;b&gt;&amp;", 1, true))

-- ---- curves and stretches -----------------------------------------------------------------------

-- Windows that overlap, touch and leave gaps: every moment belongs to the window that holds it and whose
-- centre is nearest. Recomputed by trying every whole number.
for _ = 1, check.cases(30) do
    local n, list, at = check.random(1, 12), {}, 0
    for i = 1, n do
        at = at + 2 * check.random(1, 8)
        list[i] = { at, at + 10 }
    end
    local windows = stand_in.windows(list)
    local shares = moments.shares(windows)
    local holds = {}
    for i = 1, n do holds[i] = check.random(0, 1) == 1 end
    local total, best = stretches.measure(shares, function(i) return holds[i] end)
    local counted, run, longest = 0, 0, 0
    for unit = 0, 2 * (at + 12) do -- halves, each judged at its middle
        local t, nearest, distance = unit / 2 + 0.25, nil, math.huge
        for i, pair in ipairs(list) do
            local away = math.abs(t - (pair[1] + pair[2]) / 2)
            if t >= pair[1] and t < pair[2] and away < distance then nearest, distance = i, away end
        end
        if nearest and holds[nearest] then
            counted = counted + 0.5
            run = run + 0.5
            longest = math.max(longest, run)
        else
            run = 0
        end
    end
    check.near(total, counted, 1e-9, "total of a stretch")
    check.near(best and best[2] - best[1] or 0, longest, 1e-9, "longest stretch")
    check.near(stretches.within(shares, 0, at + 12, function(i) return holds[i] end), counted, 1e-9, "within")
end

-- The area under a curve is the sum over windows of number times share.
local svg_curve = require "thole.svg_curve"
for _ = 1, check.cases(10) do
    local n = check.random(2, 30)
    local windows = stand_in.windows(sliding(0, 20, check.random(5, 30), n))
    local barcode = stand_in.barcode(windows, stand_in.random_bars(check.random, n, 40))
    local body = svg_curve.draw({ { barcode = barcode, dim = 0, label = "x" } }).body
    local area, most = 0, 1
    for rect in body:gmatch("<rect[^>]+>") do area = area + attribute(rect, "width") * attribute(rect,
        "height") end
    local wanted = 0
    local span = windows[n].finish - windows[1].start
    local shares = moments.shares(windows)
    for i, number in ipairs(barcode:betti(0)) do
        most = math.max(most, number)
        wanted = wanted + number * (shares[i][2] - shares[i][1])
    end
    check.near(area / (100 * 92) * most, wanted / span, 0.01 * most, "area of a curve")
end

-- ---- colours ------------------------------------------------------------------------------------

-- Hues of dimensions stay apart for readers who see red, green or blue differently. The matrices for full
-- protanopia, deuteranopia and tritanopia are those of Machado, Oliveira and Fernandes (IEEE Trans. Vis.
-- Comput. Graph. 15, 2009), from memory; distances are CIE 1976 ones in L*a*b*. 20 is several times what is
-- just seen; common practice, no source. Contrast is that of WCAG 2.1: at least 3 for graphics (1.4.11), 4.5
-- for text (1.4.3).
local SIGHTS = {
    { 1, 0, 0, 0, 1, 0, 0, 0, 1 },
    { 0.152286, 1.052583, -0.204868, 0.114503, 0.786281, 0.099216, -0.003882, -0.048116, 1.051998 },
    { 0.367322, 0.860646, -0.227968, 0.280085, 0.672501, 0.047413, -0.011820, 0.042940, 0.968881 },
    { 1.255528, -0.076749, -0.178779, -0.078411, 0.930809, 0.147602, 0.004733, 0.691367, 0.303900 },
}

local function linear(colour)
    local rgb = {}
    for i, hex in ipairs { colour:match("#(%x%x)(%x%x)(%x%x)") } do
        local c = tonumber(hex, 16) / 255
        rgb[i] = c <= 0.04045 and c / 12.92 or ((c + 0.055) / 1.055) ^ 2.4
    end
    return rgb
end

local function lab(rgb)
    local function f(t)
        t = math.max(t, 0)
        return t > 0.008856 and t ^ (1 / 3) or 7.787 * t + 16 / 116
    end
    local x = f((0.4124 * rgb[1] + 0.3576 * rgb[2] + 0.1805 * rgb[3]) / 0.9505)
    local y = f(0.2126 * rgb[1] + 0.7152 * rgb[2] + 0.0722 * rgb[3])
    local z = f((0.0193 * rgb[1] + 0.1192 * rgb[2] + 0.9505 * rgb[3]) / 1.089)
    return { 116 * y - 16, 500 * (x - y), 200 * (y - z) }
end

local function contrast(a, b)
    local function light(colour)
        local rgb = linear(colour)
        return 0.2126 * rgb[1] + 0.7152 * rgb[2] + 0.0722 * rgb[3] + 0.05
    end
    return math.max(light(a) / light(b), light(b) / light(a))
end

local svg = require "thole.svg"
check.near(contrast("#ffffff", "#000000"), 21, 1e-9)
for scheme, colours in pairs { light = svg.light, dark = svg.dark } do
    for i, hue in ipairs(colours) do
        check.truthy(contrast(hue, colours.ground) >= 3, scheme .. ": hue " .. i .. " is faint")
        for j = i + 1, #colours do
            for k, m in ipairs(SIGHTS) do
                local seen = {}
                for _, colour in ipairs { hue, colours[j] } do
                    local c = linear(colour)
                    seen[#seen + 1] = lab { m[1] * c[1] + m[2] * c[2] + m[3] * c[3],
                        m[4] * c[1] + m[5] * c[2] + m[6] * c[3], m[7] * c[1] + m[8] * c[2] + m[9] * c[3] }
                end
                local a, b = seen[1], seen[2]
                local apart = math.sqrt((a[1] - b[1]) ^ 2 + (a[2] - b[2]) ^ 2 + (a[3] - b[3]) ^ 2)
                check.truthy(apart >= 20, ("%s: hues %d and %d are %.0f apart for sight %d"):format(scheme, i,
                    j, apart, k))
            end
        end
    end
    for _, name in ipairs { "ink", "soft" } do
        check.truthy(contrast(colours[name], colours.ground) >= 4.5, scheme .. ": " .. name .. " is faint")
    end
end

check.finish()
