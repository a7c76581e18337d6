-- The time axis under every chart: local time with its day boundaries on a calendar clock, plain
-- numbers otherwise.

local escape = require "thole.escape"
local moments = require "thole.moments"
local native = require "thole.native"
local svg = require "thole.svg"

local axis = {}
axis.__index = axis

local HEIGHT = 34 -- two lines of labels
axis.height = HEIGHT

local HOUR, DAY = 3600, 86400

-- Offsets from UTC as the windows' own ends show them: list of { instant, offset } in time order.
local function offsets_of(windows)
    local seen = {}
    for window in windows:each() do
        for _, time in ipairs { window.start, window.finish } do
            local instant, offset = moments.parse(time)
            seen[#seen + 1] = { instant, offset }
        end
    end
    table.sort(seen, function(a, b) return a[1] < b[1] end)
    local kept = {}
    for _, pair in ipairs(seen) do
        if #kept == 0 or kept[#kept][2] ~= pair[2] then kept[#kept + 1] = pair end
    end
    return kept
end

-- The offset in force at an instant: that of the last window's end at or before it.
function axis:offset(instant)
    local offset = self.offsets[1][2]
    for _, pair in ipairs(self.offsets) do
        if pair[1] > instant then break end
        offset = pair[2]
    end
    return offset
end

-- The instant of a local time given as seconds since 1970-01-01T00:00:00 local. Of a time that comes
-- twice the first is taken; for one that the clock jumped over, the offset before the jump counts, so that a
-- midnight that never came is the moment of the jump.
function axis:instant(local_seconds)
    local first = local_seconds - self:offset(local_seconds)
    local second = local_seconds - self:offset(first)
    if second == first or self:offset(second) == self:offset(first) then return second end
    return local_seconds - self:offset(second)
end

-- An axis from the first window's start to the last finish of any window.
-- zone: name shown beside the axis; unit: name of a plain clock's unit.
function axis.over(windows, zone, unit)
    local self = setmetatable({ zone = zone, unit = unit }, axis)
    local first = windows[1].start
    self.calendar = moments.is_calendar(first)
    self.low = moments.parse(first)
    self.high = self.low
    for window in windows:each() do self.high = math.max(self.high, (moments.parse(window.finish))) end
    if self.calendar then self.offsets = offsets_of(windows) end
    self.ticks = self.calendar and self:calendar_ticks() or self:plain_ticks()
    local boundaries = 0 -- labelled ones inside the picture; fewer than two do not make a scale
    for _, tick in ipairs(self.ticks) do
        if tick.strong and tick.upper and tick.at > self.low and tick.at < self.high then
            boundaries = boundaries + 1
        end
    end
    self.has_boundaries = boundaries >= 2
    return self
end

-- Share of the way along the axis of a time, or of a number on the axis.
function axis:place(time)
    local number = type(time) == "number" and time or moments.parse(time)
    return (number - self.low) / (self.high - self.low)
end

function axis:x(time)
    return svg.percent(self:place(time))
end

-- A tick is { at = number on the axis, upper =, lower = labels or nil, strong = true: a boundary,
-- wide = true: label only where there is room }.

function axis:plain_ticks()
    local span = self.high - self.low
    local step = 10.0 ^ math.floor(math.log(span / 6, 10))
    for _, factor in ipairs { 1, 2, 5, 10 } do
        if span / (step * factor) <= 7 then
            step = step * factor
            break
        end
    end
    local ticks = {}
    for i = math.ceil(self.low / step), math.floor(self.high / step) do
        ticks[#ticks + 1] = { at = i * step, upper = escape.number(tonumber(("%.12g"):format(i * step))),
                strong = true }
    end
    return ticks
end

local HOUR_STEPS = { 60, 300, 600, 1800, HOUR, 2 * HOUR, 3 * HOUR, 6 * HOUR, 12 * HOUR }

-- Times of day between the day boundaries of a span of a few days.
function axis:hour_ticks(ticks, first_local, last_local)
    local span = self.high - self.low
    local step = 12 * HOUR
    for _, candidate in ipairs(HOUR_STEPS) do
        if span / candidate <= 9 then
            step = candidate
            break
        end
    end
    if span > 3 * DAY then step = 12 * HOUR end
    for at = first_local // step * step, last_local, step do
        if at % DAY ~= 0 then
            ticks[#ticks + 1] = { at = self:instant(at), wide = span > 2 * DAY,
                    upper = ("%02d:%02d"):format(at % DAY // HOUR, at % HOUR // 60) }
        end
    end
end

function axis:calendar_ticks()
    local ticks = {}
    local first_local = math.floor(self.low) + self:offset(self.low)
    local last_local = math.ceil(self.high) + self:offset(self.high)
    local days = (self.high - self.low) / DAY
    for day = first_local // DAY, last_local // DAY do
        local year, month, date = moments.date(day)
        local _, weekday, month_name = moments.day_name(day)
        local tick = { at = self:instant(day * DAY), strong = true, day = day }
        if days <= 10 then
            tick.upper, tick.lower = weekday, ("%d %s"):format(date, month_name)
        elseif days <= 62 then
            tick.strong = weekday == "Mon"
            if tick.strong then
                tick.upper, tick.lower = ("%d %s"):format(date, month_name), ("%d"):format(year)
            end
        elseif days <= 1100 then
            tick = date == 1 and tick or nil
            if tick and (days <= 400 or month % 6 == 1) then
                tick.upper, tick.lower = month_name, ("%d"):format(year)
            end
        else
            tick = date == 1 and month == 1 and tick or nil
            if tick then tick.upper = ("%d"):format(year) end
        end
        ticks[#ticks + 1] = tick
    end
    if days <= 10 then self:hour_ticks(ticks, first_local, last_local) end
    return ticks
end

-- Refuse a dimension that the barcode was not computed in: an empty chart would look like a result.
function axis.check_dim(barcode, dim)
    for _, known in ipairs(barcode.dims) do
        if known == dim then return dim end
    end
    native.fail(("dimension %s is not among those of this barcode, %s: ask net:zigzag for it with dims")
        :format(tostring(dim), table.concat(barcode.dims, ", ")))
end

-- A number on the axis for people: local time, or the plain number.
function axis:name(at)
    if not self.calendar then return escape.number(at) end
    local here = math.tointeger(math.floor(at)) + self:offset(at)
    local second = here % 60
    return ("%s %02d:%02d%s"):format(moments.day_name(here // DAY), here % DAY // HOUR, here % HOUR // 60,
            second > 0 and (":%02d"):format(second) or "")
end

-- What the axis is in, for a caption: "local time in Atlantic/Azores, 2031".
function axis:caption()
    if not self.calendar then return "time in " .. (self.unit or "the clock's unit") end
    local first = moments.date((math.floor(self.low) + self:offset(self.low)) // DAY)
    local last = moments.date((math.floor(self.high) + self:offset(self.high)) // DAY)
    local years = first == last and ("%d"):format(first) or ("%d to %d"):format(first, last)
    return ("local time in %s, %s"):format(self.zone or "UTC", years)
end

-- Lines across a drawing from y = `top` to `bottom` (numbers, or text with "%").
function axis:lines(top, bottom)
    local out = {}
    for _, tick in ipairs(self.ticks) do
        local at = self:place(tick.at)
        if at >= 0 and at <= 1 then
            local x = svg.percent(at)
            out[#out + 1] = ('<line class="%s" x1="%s" x2="%s" y1="%s" y2="%s"/>\n'):format(tick.strong
                    and "rule" or "faint",
                    x, x, top, bottom)
        end
    end
    return table.concat(out)
end

-- The ticks that carry a label, as { tick, share of the way, true where the second line has little room }.
-- The day that is under way where the axis begins has its boundary to the left of the picture; it is named
-- at the edge, where there is room.
local function labelled(self)
    local chosen, under_way, next_boundary = {}, nil, 1
    for _, tick in ipairs(self.ticks) do
        local at = self:place(tick.at)
        if tick.upper and at >= 0 and at < 0.95 then
            chosen[#chosen + 1] = { tick, at }
            if tick.strong then next_boundary = math.min(next_boundary, at) end
        elseif tick.upper and tick.day and at < 0 then
            under_way = tick
        end
    end
    if not under_way or next_boundary <= 0.11 then return chosen end
    local kept = { { under_way, 0, next_boundary < 0.17 } }
    for _, item in ipairs(chosen) do
        if item[1].strong or item[2] > 0.09 then kept[#kept + 1] = item end
    end
    return kept
end

-- Labels, in two lines from y = 0 to `height`; only those of boundaries when `sparse`.
function axis:labels(sparse)
    local out = {}
    local function text(class, x, y, words)
        out[#out + 1] = ('<text class="%s" x="%s" y="%d" dx="3">%s</text>\n'):format(class, x, y,
                escape.xml(words))
    end
    for _, item in ipairs(labelled(self)) do
        local tick, x = item[1], svg.percent(item[2])
        if tick.strong then
            text("day", x, 13, tick.upper)
            if tick.lower then text(item[3] and "soft wide" or "soft", x, 28, tick.lower) end
        elseif not (sparse and self.has_boundaries) then
            text(tick.wide and "soft wide" or "soft", x, 28, tick.upper)
        end
    end
    return table.concat(out)
end

return axis
