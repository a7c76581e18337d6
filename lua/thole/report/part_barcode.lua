-- { "barcode", { bars, title = "…", dims = {0, 1} }, … }: barcodes, side by side where there is room.

local page = require "thole.report.page"
local svg = require "thole.svg"
local svg_barcode = require "thole.svg_barcode"

return function(part, id)
    local out = { '<div class="pair">\n' }
    for i = 2, #part do
        local one = part[i]
        local drawn = svg_barcode.draw(one[1], { id = ("%s-%d-"):format(id, i), dims = one.dims })
        out[#out + 1] = page.figure(svg.inline(drawn), one.title,
                ("A bar is a piece or a loop for as long as it lasts. Across: %s.")
                :format(drawn.caption))
    end
    out[#out + 1] = "</div>\n" .. '<p class="note">' .. page.text(svg_barcode.legend) ..
            " Dashed: seen only where two neighbouring windows meet, in neither of them.</p>\n"
    return "Barcodes", table.concat(out)
end
