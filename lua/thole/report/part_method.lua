-- { "method", recipe = "…", parameters = p, net = net, bars = { bars, … } }: how it was computed, so
-- that somebody else can do it again.

local escape = require "thole.escape"
local moments = require "thole.moments"
local native = require "thole.native"
local page = require "thole.report.page"

local function parameter_text(value)
    if type(value) == "number" then return escape.number(value) end
    if type(value) ~= "table" then return tostring(value) end
    local items = {}
    for i, item in ipairs(value) do items[i] = parameter_text(item) end
    return table.concat(items, ",")
end

local function parameters(list)
    local names, out = {}, {}
    for name in pairs(list) do names[#names + 1] = tostring(name) end
    table.sort(names)
    for i, name in ipairs(names) do
        out[i] = ("<code>%s=%s</code>"):format(page.text(name), page.text(parameter_text(list[name])))
    end
    return table.concat(out, " ")
end

-- "335 windows of 1 h, one every 30 min", or what can be said of uneven ones.
local function windows_text(windows, unit)
    local lengths, steps = {}, {}
    local previous
    for window in windows:each() do
        local start, finish = moments.parse(window.start), moments.parse(window.finish)
        lengths[#lengths + 1] = finish - start
        if previous then steps[#steps + 1] = start - previous end
        previous = start
    end
    local function range(list)
        local low, high = math.huge, -math.huge
        for _, x in ipairs(list) do low, high = math.min(low, x), math.max(high, x) end
        if low == high then return moments.duration(low, unit) end
        return moments.duration(low, unit) .. " to " .. moments.duration(high, unit)
    end
    local text = ("%s %s of %s"):format(escape.count(#windows), #windows == 1 and "window" or "windows",
            range(lengths))
    if #steps == 0 then return text end
    return text .. ", each starting " .. range(steps) .. " after the one before"
end

-- Rounded up to 1, 2 or 5 times a power of ten megabytes: the exact figure depends on how many threads
-- ran, and a report should not.
local function memory_text(bytes)
    local step = 1
    local factors, i = { 2, 2.5, 2 }, 0
    while step * 1000000 < bytes do
        i = i % 3 + 1
        step = step * factors[i]
    end
    return ("at most %s MB"):format(escape.count(math.tointeger(step)))
end

local function cells_text(cells)
    local parts, dim = {}, 0
    while cells[dim] or cells[dim + 1] do
        parts[#parts + 1] = ("%s of dimension %d"):format(escape.count(cells[dim] or 0), dim)
        dim = dim + 1
    end
    return table.concat(parts, ", ")
end

local function radius_text(radius)
    if radius == "graph" then return "radius graph (places and links only)" end
    if radius == 0 then return "radius 0 (places only)" end
    if radius == 1 then
        return "radius 1 (three places all linked to one another are filled in, and so on upwards)"
    end
    return ("radius %s (places up to %s links apart count as near; whatever is near to one another is "
        .. "filled in)")
            :format(radius, radius)
end

return function(part)
    local unit = type(part.bars[1].windows[1].start) == "number" and (part.bars[1].unit or "") or nil
    local facts = {
        { "Recipe", "<code>" .. page.text(part.recipe or "–") .. "</code>" },
        { "Parameters", parameters(part.parameters or {}) },
        { "Input", page.name(part.net:summary().source) },
        { "Windows", page.text(windows_text(part.bars[1].windows, unit)) },
    }
    for _, bars in ipairs(part.bars) do
        local title = ("Zigzag, radius %s"):format(tostring(bars.radius))
        facts[#facts + 1] = { title, page.text(("%s; joins by %s; %s bars; cells: %s; memory %s"):format(
            radius_text(bars.radius), bars.join, escape.count(#bars), cells_text(bars.cells),
                    memory_text(bars.peak_bytes))) }
    end
    facts[#facts + 1] = { "Versions", page.text(("Thole %s, %s"):format(native.version, _VERSION)) }
    return "How it was computed", page.facts(facts) .. page.paragraph(
        "A link is in a window when it is active at some instant of it, its finish not included. Between "
        .. "two neighbouring " ..
        "windows stands their join: the links of both (union), or those that both have (intersection). "
        .. "The barcode is " ..
        "the interval decomposition of the zigzag of homology groups with coefficients in Z/2, by the "
        .. "method of Dey and " ..
        "Hou (“Fast computation of zigzag persistence”, ESA 2022) in blocks of time that are glued by the "
        .. "interval " ..
        "decomposition of Carlsson and de Silva (“Zigzag persistence”, Foundations of Computational "
        .. "Mathematics 10, 2010).")
end
