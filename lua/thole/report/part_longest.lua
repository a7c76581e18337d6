-- { "longest", bars = bars, dim = 1, most = 10 }: the bars that last longest.

local axis = require "thole.svg_axis"
local escape = require "thole.escape"
local moments = require "thole.moments"
local page = require "thole.report.page"
local words = require("thole.svg_barcode").words

local COLUMNS = { { "" }, { "lasts" }, { "opens" }, { "closes" }, { "positions" }, { "kind" } }

return function(part)
    local bars, dim, most = part.bars, axis.check_dim(part.bars, part.dim), part.most or 10
    local _, many = words.of(dim)
    local unit = type(bars.windows[1].start) == "number" and (bars.unit or "") or nil
    local rows = {}
    for bar in bars:each { dim = dim, longest = most } do
        rows[#rows + 1] = { ("%d"):format(#rows + 1), moments.duration(bar.lifespan, unit),
                moments.name(bar.opens),
                moments.name(bar.closes), ("%s to %s"):format(escape.number(bar.first),
                        escape.number(bar.last)),
                page.text(bar.kind) }
    end
    local title = ("The longest %s"):format(many)
    if #rows == 0 then return title, page.paragraph(("There are no %s."):format(many)) end
    return title, page.table(("The %d longest of %s %s, at radius %s. Opens: the first window it touches "
        .. "starts. " ..
        "Closes: the last one ends. Lasts: from the centre of its first position to that of its last. " ..
        "Positions: windows have whole numbers, joins of two the halves between."):format(#rows,
        escape.count(bars:count { dim = dim }), many, tostring(bars.radius)), COLUMNS, rows)
end
