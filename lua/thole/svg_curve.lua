-- Curves of Betti numbers: one panel a curve, one step a window, over the real time axis.
--
-- Each moment is given to the window whose centre is nearest; moments in a gap between windows are
-- given to none, and the curve stops there.

local axis = require "thole.svg_axis"
local escape = require "thole.escape"
local moments = require "thole.moments"
local svg = require "thole.svg"

local HEAD, BODY = 26, 92

local chart = {}

-- Horizontal lines at whole numbers, at most four, and their labels at the left.
local function grid(most, top)
    local step = 1
    for _, candidate in ipairs { 1, 2, 5, 10, 20, 50, 100, 200, 500, 1000, 2000, 5000, 10000 } do
        step = candidate
        if most / step <= 4 then break end
    end
    local out = {}
    for value = 0, most, step do
        local y = svg.decimal(top + BODY * (1 - value / most), 1)
        out[#out + 1] = ('<line class="faint" x1="0" x2="100%%" y1="%s" y2="%s"/>\n'):format(y, y)
        out[#out + 1] = ('<text class="soft" x="-6" y="%s" dy="4" text-anchor="end">%s</text>\n'):format(y,
                escape.count(value))
    end
    return table.concat(out)
end

-- Windows with equal numbers that touch are drawn as one column.
local function columns(numbers, shares, scale, most, top)
    local out, i = {}, 1
    while i <= #numbers do
        local left, right, value = shares[i][1], shares[i][2], numbers[i]
        while numbers[i + 1] == value and shares[i + 1][1] <= right do
            i = i + 1
            right = shares[i][2]
        end
        if value > 0 and right > left then
            local height = BODY * value / most
            -- From rounded end to rounded end, so that neighbours meet without a hair between them.
            local x = math.floor(scale:place(left) * 1e5 + 0.5) / 1e5
            local width = math.floor(scale:place(right) * 1e5 + 0.5) / 1e5 - x
            out[#out + 1] = ('<rect class="step" x="%s" y="%s" width="%s" height="%s"/>\n'):format(
                svg.percent(x), svg.decimal(top + BODY - height, 1), svg.percent(width),
                    svg.decimal(height, 1))
        end
        i = i + 1
    end
    return table.concat(out)
end

-- series: list of { barcode =, dim =, label = }, all over the same windows.
function chart.draw(series, opts)
    opts = opts or {}
    local first = series[1].barcode
    local scale = axis.over(first.windows, first.zone, first.unit)
    local shares = moments.shares(first.windows)
    local top, out = axis.height, {}
    for _, curve in ipairs(series) do
        local numbers = curve.barcode:betti(axis.check_dim(curve.barcode, curve.dim))
        local most = 1
        for _, value in ipairs(numbers) do most = math.max(most, value) end
        out[#out + 1] = ('<line class="frame" x1="0" x2="100%%" y1="%d" y2="%d"/>\n'):format(top, top)
        out[#out + 1] = ('<text class="head" x="0" y="%d">%s</text>\n'):format(top + 17,
                escape.xml(curve.label))
        out[#out + 1] = grid(most, top + HEAD)
        out[#out + 1] = ('<g class="%s">\n%s</g>\n'):format(svg.hue(curve.dim),
                columns(numbers, shares, scale, most, top + HEAD))
        top = top + HEAD + BODY + 14
    end
    return { height = top, left = 40, caption = scale:caption(), title = opts.title or "Betti numbers, "
            .. scale:caption(),
            body = scale:labels() .. scale:lines(axis.height, top) .. table.concat(out) }
end

return chart
