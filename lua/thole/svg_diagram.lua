-- A persistence diagram: each bar a mark, its birth across and its death upwards, both in real time.
-- A bar's lifespan is its height above the diagonal. The shape of a mark tells the bar's kind; bars
-- with the same birth, death and kind share one mark, which grows with their number.

local axis = require "thole.svg_axis"
local escape = require "thole.escape"
local moments = require "thole.moments"
local svg = require "thole.svg"
local words = require("thole.svg_barcode").words

local chart = {}

chart.legend = "Square: both ends closed. Ring: both ends open. Triangle pointing right: closed, then "
    .. "open. " ..
        "Triangle pointing left: open, then closed. A larger mark stands for several bars: 2 to 4, 5 or more."

local function square(r)
    return ("M-%d-%dh%dv%dh-%dz"):format(r, r, 2 * r, 2 * r, 2 * r)
end

local function ring(r)
    return ("M-%d 0a%d %d 0 1 0 %d 0a%d %d 0 1 0-%d 0z"):format(r, r, r, 2 * r, r, r, 2 * r)
end

-- Triangles lean over their centre a little, so that they look as large as the squares.
local function pointing_right(r)
    return ("M-%d-%dl%d %dl-%d %dz"):format(r, r + 1, 2 * r, r + 1, 2 * r, r + 1)
end

local function pointing_left(r)
    return ("M%d-%dl-%d %dl%d %dz"):format(r, r + 1, 2 * r, r + 1, 2 * r, r + 1)
end

-- Kinds in the order drawn, each with the shape of a mark of half width r around 0, 0.
local KINDS = {
    { "closed-closed", square, "solid" },
    { "closed-open", pointing_right, "solid" },
    { "open-closed", pointing_left, "solid" },
    { "open-open", ring, "hollow" },
}
-- Half widths of marks for 1, 2 to 4, 5 or more bars; smaller ones where there are many marks.
local SIZES, SMALL_SIZES = { 3, 5, 7 }, { 2, 3, 4 }
local MANY = 600

local function size_of(count)
    return count == 1 and 1 or count <= 4 and 2 or 3
end

-- Bars of a dimension with equal ends and kind, counted.
local function gather(barcode, dim)
    local marks, at = {}, {}
    for bar in barcode:each { dim = dim } do
        local key = bar.first .. " " .. bar.last .. " " .. bar.kind
        local mark = at[key]
        if mark then
            mark.count = mark.count + 1
        else
            mark = { count = 1, birth = bar.birth, death = bar.death, kind = bar.kind,
                    lifespan = bar.lifespan }
            at[key] = mark
            marks[#marks + 1] = mark
        end
    end
    return marks
end

local function describe(mark, dim, scale)
    local one, many = words.of(dim)
    return ("%s %s, birth %s, death %s, lifespan %s, %s"):format(escape.count(mark.count),
        mark.count == 1 and one or many, moments.name(mark.birth), moments.name(mark.death),
        moments.duration(mark.lifespan, not scale.calendar and (scale.unit or "") or nil), mark.kind)
end

-- Labels and lines of the upward axis, the same scale as the one across.
local function upward(scale)
    local out = {}
    for _, tick in ipairs(scale.ticks) do
        local at = scale:place(tick.at)
        if (tick.strong or not scale.has_boundaries) and at >= 0 and at <= 1 then
            local y = svg.percent(1 - at)
            out[#out + 1] = ('<line class="rule" x1="0" x2="100%%" y1="%s" y2="%s"/>\n'):format(y, y)
            if tick.upper and at < 0.97 then
                out[#out + 1] = ('<text class="soft" x="-6" y="%s" dy="-3" text-anchor="end">%s</text>\n')
                        :format(y, escape.xml(tick.upper))
            end
        end
    end
    return table.concat(out)
end

-- Draw one dimension (opts.dim; default the highest of the barcode). The drawing fills a square
-- viewport; labels lie outside of it, at the left and, for the axis across, below.
function chart.draw(barcode, opts)
    opts = opts or {}
    local dims = barcode.dims
    local dim = axis.check_dim(barcode, opts.dim or dims[#dims])
    local id = opts.id or "dots"
    local scale = axis.over(barcode.windows, barcode.zone, barcode.unit)
    local marks = gather(barcode, dim)
    local total = 0
    for _, mark in ipairs(marks) do total = total + mark.count end
    local out = { ('<g class="%s">\n<defs>\n'):format(svg.hue(dim)) }
    for k, kind in ipairs(KINDS) do
        for s, r in ipairs(#marks < MANY and SIZES or SMALL_SIZES) do
            out[#out + 1] = ('<path id="%s-%d%d" class="%s" d="%s"/>\n'):format(id, k, s, kind[3], kind[2](r))
        end
    end
    out[#out + 1] = "</defs>\n"
    for k, kind in ipairs(KINDS) do
        for _, mark in ipairs(marks) do
            if mark.kind == kind[1] then
                out[#out + 1] = ('<use href="#%s-%d%d" x="%s" y="%s"><title>%s</title></use>\n'):format(id, k,
                    size_of(mark.count), scale:x(mark.birth), svg.percent(1 - scale:place(mark.death)),
                    escape.xml(describe(mark, dim, scale)))
            end
        end
    end
    out[#out + 1] = "</g>\n"
    local _, many = words.of(dim)
    local body = table.concat {
        upward(scale), '<svg y="100%" overflow="visible" width="100%" height="1">\n', scale:labels(true),
                "</svg>\n",
        scale:lines("0", "100%"),
        '<line class="diagonal" x1="0" y1="100%" x2="100%" y2="0"/>\n',
        '<rect class="frame" width="100%" height="100%"/>\n', table.concat(out) }
    return { body = body, caption = scale:caption(), height = 640, square = true, left = 40,
            below = axis.height, dim = dim,
            bars = total, title = opts.title or ("Persistence diagram of %s (dimension %d), %s"):format(many,
                    dim,
            scale:caption()) }
end

return chart
