-- A barcode over the real time axis.
--
-- One panel a dimension; each bar runs from the centre of its first position to the centre of its last
-- and lies in the lowest row that is free. The shape of an end tells its kind: a post is a closed
-- end, a ring an open one. A bar of one join, which is in no window, is dashed.

local axis = require "thole.svg_axis"
local escape = require "thole.escape"
local moments = require "thole.moments"
local svg = require "thole.svg"

local HEAD = 26       -- a panel's heading
local GAP = 0.012     -- room between two bars of a row, as a share of the width
local SMALL_GAP = 0.004
local MANY = 500      -- bars of a panel from which the gap is small: the picture gets high otherwise
local TITLED = 3000   -- panels with more bars than this carry no words on each bar

local words = {}

-- What a class of a dimension is called: "piece", "pieces".
function words.of(dim)
    if dim == 0 then return "piece", "pieces" end
    if dim == 1 then return "loop", "loops" end
    if dim == 2 then return "hollow", "hollows" end
    return ("hole of dimension %d"):format(dim), ("holes of dimension %d"):format(dim)
end

-- Give each bar the lowest row in which it fits; bars come in order of their start. Returns the
-- number of rows. A heap is not worth it: rows are few where a picture is of use.
local function into_rows(bars)
    local gap = #bars < MANY and GAP or SMALL_GAP
    local ends = {}
    for _, bar in ipairs(bars) do
        local row = 1
        while ends[row] and ends[row] > bar.left do row = row + 1 end
        ends[row] = bar.right + gap
        bar.row = row
    end
    return #ends
end

local function gather(barcode, dim, scale)
    local bars = {}
    for bar in barcode:each { dim = dim } do
        bars[#bars + 1] = { left = scale:place(bar.birth), right = scale:place(bar.death), kind = bar.kind,
                passing = bar.join_only, first = bar.first, last = bar.last, opens = bar.opens,
                closes = bar.closes, lifespan = bar.lifespan }
    end
    -- Longer ones first where several start together, so that they lie lower and are easy to follow.
    for i, bar in ipairs(bars) do bar.order = i end
    table.sort(bars, function(a, b)
        if a.left ~= b.left then return a.left < b.left end
        if a.right ~= b.right then return a.right > b.right end
        return a.order < b.order
    end)
    return bars
end

local function describe(bar, dim, scale)
    return ("%s from %s to %s, windows %s to %s, lasts %s, %s"):format((words.of(dim)),
            moments.name(bar.opens),
        moments.name(bar.closes), escape.number(bar.first), escape.number(bar.last),
        moments.duration(bar.lifespan, not scale.calendar and (scale.unit or "") or nil), bar.kind)
end

-- Which shape stands at which end of a kind of bar, in the order in which kinds are drawn.
local KINDS = { { "closed-closed", "post", "post" }, { "closed-open", "post", "ring" },
        { "open-closed", "ring", "post" }, { "open-open", "ring", "ring" } }

-- Posts and rings as markers.
local function shapes(id, pitch)
    local size = math.max(3, pitch - 2)
    local ring = math.min(size / 2, 3.5) - 0.5
    return ([[
<defs>
<marker id="%s-post" markerUnits="userSpaceOnUse" markerWidth="4" markerHeight="%d" refX="2" refY="%s">
<rect class="solid" x="1" width="2" height="%d"/></marker>
<marker id="%s-ring" markerUnits="userSpaceOnUse" markerWidth="10" markerHeight="10" refX="5" refY="5">
<circle class="hollow" cx="5" cy="5" r="%s"/></marker>
</defs>
]]):format(id, size, svg.decimal(size / 2), size, id, svg.decimal(ring))
end

local function pitch_for(rows)
    if rows <= 24 then return 11 end
    if rows <= 60 then return 8 end
    return rows <= 160 and 6 or 4
end

-- One bar at height y, with words for those who point at it.
local function bar_line(bar, y, title)
    y = svg.decimal(y, 1)
    local line = ('<line%s x1="%s" x2="%s" y1="%s" y2="%s"'):format(bar.passing and ' class="passing"' or "",
        svg.percent(bar.left), svg.percent(bar.right), y, y)
    if not title then return line .. "/>\n" end
    return line .. "><title>" .. escape.xml(title) .. "</title></line>\n"
end

-- One dimension's panel, its top at y = `top`. Returns the drawing and its height.
local function panel(barcode, dim, scale, id, top)
    local bars = gather(barcode, dim, scale)
    local rows = into_rows(bars)
    local pitch = pitch_for(rows)
    local height = HEAD + math.max(rows, 1) * pitch + 8
    local _, many = words.of(dim)
    local out = {}
    out[#out + 1] = ('<text class="head" x="0" y="%d">%s</text>\n'):format(top + 17,
        escape.xml(("%s (dimension %d): %s %s"):format(many:sub(1, 1):upper() .. many:sub(2), dim,
                escape.count(#bars),
                #bars == 1 and "bar" or "bars")))
    out[#out + 1] = ('<g id="%s" class="%s" stroke-width="%s">\n'):format(id, svg.hue(dim),
            svg.decimal(math.max(1.5, pitch * 0.3)))
    out[#out + 1] = shapes(id, pitch)
    for _, kind in ipairs(KINDS) do
        out[#out + 1] = ('<g marker-start="url(#%s-%s)" marker-end="url(#%s-%s)">\n'):format(id, kind[2], id,
                kind[3])
        for _, bar in ipairs(bars) do
            if bar.kind == kind[1] then
                out[#out + 1] = bar_line(bar, top + height - 6 - (bar.row - 0.5) * pitch,
                        #bars <= TITLED and describe(bar, dim, scale))
            end
        end
        out[#out + 1] = "</g>\n"
    end
    out[#out + 1] = "</g>\n"
    return table.concat(out), height
end

-- What the shapes mean, as plain text for a caption.
local LEGEND = "A post is a closed end, a ring an open one. At the left, a post: links were added; a "
    .. "ring: links " ..
        "went. At the right, a post: links went; a ring: links were added."

local chart = { words = words, legend = LEGEND }

-- Draw a barcode. opts: dims (list; default all of the barcode), id (unique within a page), title.
-- Returns what svg.document and svg.inline take.
function chart.draw(barcode, opts)
    opts = opts or {}
    local scale = axis.over(barcode.windows, barcode.zone, barcode.unit)
    local id = opts.id or "bars"
    local top, panels, tops = axis.height, {}, {}
    for _, dim in ipairs(opts.dims or barcode.dims) do
        axis.check_dim(barcode, dim)
        local drawing, height = panel(barcode, dim, scale, ("%s%d"):format(id, dim), top)
        panels[#panels + 1] = drawing
        tops[#tops + 1] = top
        top = top + height
    end
    local lines = {}
    for _, y in ipairs(tops) do
        lines[#lines + 1] = ('<line class="frame" x1="0" x2="100%%" y1="%d" y2="%d"/>\n'):format(y, y)
    end
    return { height = top, title = opts.title or "Barcode, " .. scale:caption(), caption = scale:caption(),
            body = scale:labels() .. scale:lines(axis.height, top) .. table.concat(lines)
                    .. table.concat(panels) }
end

return chart
