-- { "days", net = net, bars = bars }: the local days one by one. Only on a calendar clock, and for at
-- most 62 days; otherwise the part is left out.

local axis = require "thole.svg_axis"
local escape = require "thole.escape"
local moments = require "thole.moments"
local page = require "thole.report.page"
local stretches = require "thole.report.stretches"

local MOST_DAYS = 62
local DAY = 86400

local COLUMNS = { { "day", whole = true }, { "links that start", number = true },
        { "in one piece", number = true },
        { "in several", number = true }, { "no link", number = true }, { "most pieces", number = true },
        { "most loops", number = true } }

local function starts_by_day(net)
    local counts = {}
    for link in net:each() do
        local day = moments.local_day(link.start)
        counts[day] = (counts[day] or 0) + 1
    end
    return counts
end

local function most_within(numbers, shares, left, right)
    local best = 0
    for i, share in ipairs(shares) do
        if share[2] > left and share[1] < right then best = math.max(best, numbers[i]) end
    end
    return best
end

-- "12 h, on Monday 3 March and 4 other days": the longest time in one piece (sign 1) or the shortest (-1).
local function extreme(wholes, sign)
    local best, others
    for _, whole in ipairs(wholes) do
        if not best or sign * whole[2] > sign * best[2] then
            best, others = whole, 0
        elseif whole[2] == best[2] then
            others = others + 1
        end
    end
    local more = others == 0 and "" or others == 1 and " and one other day"
        or (" and %d other days"):format(others)
    return ("%s, on %s%s"):format(best[3], best[1], more)
end

return function(part)
    local bars = part.bars
    local windows = bars.windows
    if not moments.is_calendar(windows[1].start) then return nil end
    axis.check_dim(bars, 0)
    axis.check_dim(bars, 1)
    local scale = axis.over(windows, bars.zone)
    local first = moments.local_day(windows[1].start)
    local last = (math.ceil(scale.high) - 1 + scale:offset(scale.high)) // DAY
    if last - first + 1 > MOST_DAYS then return nil end

    local shares = moments.shares(windows)
    local pieces, loops = bars:betti(0), bars:betti(1)
    local starts = starts_by_day(part.net)
    local rows, wholes = {}, {}
    for day = first, last do
        local left, right = scale:instant(day * DAY), scale:instant((day + 1) * DAY)
        local function lasting(holds)
            local seconds = stretches.within(shares, left, right, holds)
            return seconds > 0 and moments.duration(seconds) or "none", seconds
        end
        local name = moments.day_name(day, true)
        local whole, seconds = lasting(function(i) return pieces[i] == 1 end)
        wholes[#wholes + 1] = { name, seconds, whole }
        rows[#rows + 1] = {
            page.text(name), escape.count(starts[day] or 0), whole,
            (lasting(function(i) return pieces[i] > 1 end)), (lasting(function(i) return pieces[i] == 0 end)),
            escape.count(most_within(pieces, shares, left, right)),
            escape.count(most_within(loops, shares, left, right)) }
    end
    local longest, shortest = extreme(wholes, 1), extreme(wholes, -1)
    local words = longest ~= shortest
        and page.paragraph(("Longest in one piece: %s. Shortest: %s."):format(longest, shortest)) or ""
    return "Day by day", words .. page.table(("Local days in %s, from the first window to the last; loops "
        .. "at radius %s.")
        :format(bars.zone or "UTC", tostring(bars.radius)), COLUMNS, rows)
end
