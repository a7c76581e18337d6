-- { "diagram", { bars, dim = 1, title = "…" }, … }: persistence diagrams, one a square.

local escape = require "thole.escape"
local page = require "thole.report.page"
local svg = require "thole.svg"
local svg_diagram = require "thole.svg_diagram"

return function(part, id)
    local out = { '<div class="pair small">\n' }
    for i = 2, #part do
        local one = part[i]
        local drawn = svg_diagram.draw(one[1], { id = ("%s-%d"):format(id, i), dim = one.dim })
        out[#out + 1] = page.figure('<div class="square-box">' .. svg.inline(drawn) .. "</div>\n", one.title,
            ("%s %s; birth across, death upwards (%s). The higher above the diagonal, the longer "
                .. "it lasts.")
            :format(escape.count(drawn.bars), drawn.bars == 1 and "bar" or "bars", drawn.caption))
    end
    return "Persistence diagrams", table.concat(out) .. '</div>\n<p class="note">'
            .. page.text(svg_diagram.legend) .. "</p>\n"
end
