-- SVG helpers shared by the charts: colours, styles, the frame of a picture that stands alone.
--
-- A chart is drawn inside a viewport of a fixed height whose width is not known: along the time axis
-- everything is placed in per cent. The same drawing then fills a phone and a wide screen inside a
-- page, and has a width of its own in a file, without a script.
--
-- Colours tell dimensions apart and are never alone in doing so: each dimension has its own panel or
-- its own words. The four hues differ in lightness as well as in hue, for readers who do not tell
-- red from green.

local escape = require "thole.escape"

local svg = {}

local LIGHT = { ground = "#fbfaf5", ink = "#1c2a33", soft = "#56656e", rule = "#dcd8cb", night = "#f1eee3",
        "#0c6470", "#b3501a", "#a95fc4", "#2b3806" }
local DARK = { ground = "#11181d", ink = "#e8e4d9", soft = "#a0adb3", rule = "#2d3a42", night = "#172027",
        "#62c4c9", "#f2995f", "#a06be0", "#eaf3b4" }
svg.light, svg.dark = LIGHT, DARK

-- The colour class of a dimension; dimensions from 4 on share the last one.
function svg.hue(dim)
    return "h" .. math.min(dim, 3)
end

local function rules(colours)
    local out = {
        ("text{fill:%s;font:12px system-ui,sans-serif}"):format(colours.ink),
        ("text.soft{fill:%s}"):format(colours.soft),
        ("text.head{font-weight:600;font-size:13px}"),
        (".paper{fill:%s}"):format(colours.ground),
        (".rule{stroke:%s;stroke-width:1}"):format(colours.rule),
        (".faint{stroke:%s;stroke-width:1;stroke-dasharray:1 3}"):format(colours.rule),
        (".frame{stroke:%s;stroke-width:1;fill:none}"):format(colours.soft),
        (".diagonal{stroke:%s;stroke-width:1.5}"):format(colours.soft),
        ".step{fill:currentColor;stroke:none;fill-opacity:.8;shape-rendering:crispEdges}",
    }
    -- Shapes take the hue of the group they stand in through currentColor, also where a <use> or a marker
    -- copies them.
    for i, hue in ipairs(colours) do
        out[#out + 1] = (".h%d{color:%s;stroke:%s}"):format(i - 1, hue, hue)
    end
    out[#out + 1] = ".solid{fill:currentColor;stroke:none}"
    out[#out + 1] = (".hollow{fill:%s;stroke:currentColor;stroke-width:1.5}"):format(colours.ground)
    return table.concat(out, "\n")
end

-- Style rules of all charts, under a selector that holds them ("" for a picture that stands alone).
function svg.style()
    return rules(LIGHT) .. "\n.passing{stroke-dasharray:2 2}\n" ..
        "@media (max-width:44rem){.wide{display:none}}\n" ..
            "@media (prefers-color-scheme:dark){\n" .. rules(DARK) .. "\n}\n"
end

function svg.percent(fraction)
    return escape.decimal(fraction * 100, 3) .. "%"
end

svg.decimal = escape.decimal

-- A picture of its own. `drawn` is what a chart returns: body (what to draw), height of the viewport,
-- title, and left and below (room that labels need outside of the viewport).
function svg.document(drawn, width)
    local left, right, top = drawn.left or 16, 16, 40
    local height = top + drawn.height + (drawn.below or 0) + 12
    return table.concat {
        '<?xml version="1.0" encoding="UTF-8"?>\n',
        ('<svg xmlns="http://www.w3.org/2000/svg" width="%d" height="%d" viewBox="0 0 %d %d" role="img">\n')
            :format(width, height, width, height),
        "<title>", escape.xml(drawn.title), "</title>\n<style>\n", svg.style(), "</style>\n",
        '<rect class="paper" width="100%" height="100%"/>\n',
        ('<text class="head" x="%d" y="24">%s</text>\n'):format(left, escape.xml(drawn.title)),
        ('<svg x="%d" y="%d" width="%d" height="%d" overflow="visible">\n'):format(left, top,
                width - left - right,
                drawn.height),
        drawn.body, "</svg>\n</svg>\n",
    }
end

-- The same drawing for a page: as wide as its box, which leaves room for the labels around it. A
-- square one is as high as it is wide.
function svg.inline(drawn)
    return table.concat {
        ('<div class="chart" style="padding:0 0 %dpx %dpx">\n'):format(drawn.below or 0, drawn.left or 0),
        ('<svg role="img" %s aria-label="%s">\n'):format(
            drawn.square and 'class="square"' or ('width="100%%" height="%d"'):format(drawn.height),
                    escape.xml(drawn.title)),
        drawn.body, "</svg>\n</div>\n",
    }
end

return svg
