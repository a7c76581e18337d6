-- { "betti", { bars, dim = 0, label = "…" }, … }: Betti numbers of each window, one curve a panel.

local page = require "thole.report.page"
local svg = require "thole.svg"
local svg_curve = require "thole.svg_curve"

return function(part)
    local series = {}
    for i = 2, #part do
        series[#series + 1] = { barcode = part[i][1], dim = part[i].dim, label = part[i].label }
    end
    local drawn = svg_curve.draw(series)
    return "How many pieces and loops, window by window", page.figure(svg.inline(drawn), nil,
        ("Betti numbers. Across: %s. Each moment is counted with the window whose centre is nearest.")
            :format(drawn.caption))
end
