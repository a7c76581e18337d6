-- { "longest", bars = bars, dim = 1, most = 10, net = net }: the bars that last longest; with the network, also the
-- places that each runs through.

local axis = require "thole.svg_axis"
local escape = require "thole.escape"
local moments = require "thole.moments"
local page = require "thole.report.page"
local words = require("thole.svg_barcode").words

local COLUMNS = { { "" }, { "lasts" }, { "opens" }, { "closes" }, { "positions" }, { "kind" } }
local MOST_NAMES = 12 -- told of one part

local function part_text(names, between)
    local out = {}
    for i = 1, math.min(#names, MOST_NAMES) do out[i] = page.name(names[i]) end
    local rest = #names - #out
    return table.concat(out, between) .. (rest > 0 and (" and %d more"):format(rest) or "")
end

-- The places of a bar, at the window in the middle of its life.
local function places(bar, part, seen)
    local at = (bar.first + bar.last) / 2
    at = math.max(math.floor(at), bar.first)
    if at > bar.last then at = bar.last end
    seen[at] = seen[at] or part.bars:carriers(part.net, { at = at, dim = part.dim })
    for _, carrier in ipairs(seen[at]) do
        if carrier.bar == bar.index then
            local told = {}
            for i, names in ipairs(carrier.parts) do told[i] = part_text(names, part.dim == 1 and " – " or ", ") end
            return table.concat(told, part.dim == 1 and "; " or "; apart from ")
        end
    end
    return ""
end

local function with_places(part)
    return part.net and part.dim <= 1
end

local function columns_of(part)
    if not with_places(part) then return COLUMNS end
    local columns = table.move(COLUMNS, 1, #COLUMNS, 1, {})
    columns[#columns + 1] = { part.dim == 1 and "places in order" or "places", whole = true }
    return columns
end

return function(part)
    local bars, dim, most = part.bars, axis.check_dim(part.bars, part.dim), part.most or 10
    local _, many = words.of(dim)
    local unit = type(bars.windows[1].start) == "number" and (bars.unit or "") or nil
    local rows, seen = {}, {}
    for bar in bars:each { dim = dim, longest = most } do
        local row = { ("%d"):format(#rows + 1), moments.duration(bar.lifespan, unit),
                moments.name(bar.opens),
                moments.name(bar.closes), ("%s to %s"):format(escape.number(bar.first),
                        escape.number(bar.last)),
                page.text(bar.kind) }
        if with_places(part) then row[#row + 1] = places(bar, part, seen) end
        rows[#rows + 1] = row
    end
    local title = ("The longest %s"):format(many)
    if #rows == 0 then return title, page.paragraph(("There are no %s."):format(many)) end
    return title, page.table(("The %d longest of %s %s, at radius %s. Opens: the first window it touches "
        .. "starts. " ..
        "Closes: the last one ends. Lasts: from the centre of its first position to that of its last. " ..
        "Positions: windows have whole numbers, joins of two the halves between.%s"):format(#rows,
        escape.count(bars:count { dim = dim }), many, tostring(bars.radius),
        with_places(part) and " Places: as they are in the middle of its life." or ""), columns_of(part), rows)
end
