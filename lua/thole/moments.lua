-- Times and durations as the Lua half handles them.
--
-- On a calendar clock a time is ISO 8601 text with its offset, in the network's zone
-- ("2031-03-03T06:20:00-01:00", or "Z"); on a plain clock it is a number. Charts need both on one
-- straight axis, people need the calendar kind in words.

local escape = require "thole.escape"

local moments = {}

local MONTHS = { "January", "February", "March", "April", "May", "June", "July", "August", "September",
        "October", "November", "December" }
local DAYS = { "Monday", "Tuesday", "Wednesday", "Thursday", "Friday", "Saturday", "Sunday" }

-- Days since 1970-01-01 of a date of the proleptic Gregorian calendar, and back. Years are counted
-- from March, which puts the leap day last; 400 years are 146,097 days.
function moments.days(year, month, day)
    if month <= 2 then year = year - 1 end
    local shifted = (month + 9) % 12
    local era = year // 400
    local of_era = year - era * 400
    local of_year = (153 * shifted + 2) // 5 + day - 1
    return era * 146097 + of_era * 365 + of_era // 4 - of_era // 100 + of_year - 719468
end

function moments.date(days)
    days = days + 719468
    local era = days // 146097
    local of_era = days - era * 146097
    local year = (of_era - of_era // 1460 + of_era // 36524 - of_era // 146096) // 365
    local of_year = of_era - (365 * year + year // 4 - year // 100)
    local shifted = (5 * of_year + 2) // 153
    local month = shifted < 10 and shifted + 3 or shifted - 9
    return year + era * 400 + (month <= 2 and 1 or 0), month, of_year - (153 * shifted + 2) // 5 + 1
end

-- Take a time apart: its place on the axis (seconds since 1970-01-01T00:00:00Z, or the plain number
-- itself), and for calendar times also the offset in seconds east of UTC.
function moments.parse(time)
    if type(time) == "number" then return time, nil end
    local year, month, day, hour, minute, second, fraction, zone =
        time:match("^(%-?%d+)%-(%d%d)%-(%d%d)T(%d%d):(%d%d):(%d%d)(%.?%d*)(.*)$")
    if not year then
        local plain = tonumber(time)
        if plain then return plain, nil end
        error(("not a time: %q"):format(time))
    end
    local offset = 0
    if zone ~= "Z" then
        local sign, h, m, s = zone:match("^([+-])(%d%d):?(%d%d):?(%d*)$")
        offset = (tonumber(h) * 60 + tonumber(m)) * 60 + (tonumber(s) or 0)
        if sign == "-" then offset = -offset end
    end
    local seconds = moments.days(math.tointeger(tonumber(year)), math.tointeger(tonumber(month)),
            math.tointeger(tonumber(day))) * 86400 +
            math.tointeger(tonumber(hour)) * 3600 + math.tointeger(tonumber(minute)) * 60 +
            math.tointeger(tonumber(second)) - offset
    if #fraction > 1 then seconds = seconds + tonumber("0" .. fraction) end
    return seconds, offset
end

function moments.is_calendar(time)
    return type(time) == "string"
end

-- Weekday 1 (Monday) to 7 of a day number: 1970-01-01 was a Thursday.
function moments.weekday(days)
    return (days + 3) % 7 + 1
end

-- The local day number that a calendar time falls on.
function moments.local_day(time)
    local seconds, offset = moments.parse(time)
    return math.tointeger(math.floor((seconds + offset) // 86400))
end

-- "Mon 3 Mar", or with long = true "Monday 3 March".
function moments.day_name(days, long)
    local _, month, day = moments.date(days)
    local weekday, month_name = DAYS[moments.weekday(days)], MONTHS[month]
    if not long then weekday, month_name = weekday:sub(1, 3), month_name:sub(1, 3) end
    return ("%s %d %s"):format(weekday, day, month_name), weekday, month_name, day
end

-- "06:20", with seconds only where they are not zero.
function moments.clock_name(time)
    local hour, minute, second = time:match("T(%d%d):(%d%d):(%d%d%.?%d*)")
    if tonumber(second) == 0 then return hour .. ":" .. minute end
    return hour .. ":" .. minute .. ":" .. second
end

-- A time for people: "Mon 3 Mar 06:20" in local time ("Monday 3 March 2031 06:20" when long), or the plain
-- number.
function moments.name(time, long)
    if type(time) == "number" then return escape.number(time) end
    local day = moments.local_day(time)
    local year = long and (" %d"):format((moments.date(day))) or ""
    return moments.day_name(day, long) .. year .. " " .. moments.clock_name(time)
end

-- A duration for people. `seconds` in the clock's unit; `unit` is the name of a plain clock's unit,
-- nil on a calendar clock.
function moments.duration(seconds, unit)
    if unit and unit ~= "s" then return escape.decimal(seconds, 3) .. " " .. unit end
    if seconds < 0 then return "-" .. moments.duration(-seconds, unit) end
    local parts = {}
    local whole = math.tointeger(math.floor(seconds))
    for _, step in ipairs { { 86400, "d" }, { 3600, "h" }, { 60, "min" } } do
        -- People count the hours of a week, not its days: "65 h 30 min" rather than "2 d 17 h 30 min".
        if whole >= (step[2] == "d" and 10 * 86400 or step[1]) then
            parts[#parts + 1] = ("%d %s"):format(whole // step[1], step[2])
        end
        if #parts > 0 then whole = whole % step[1] end
    end
    local rest = whole + (seconds - math.floor(seconds))
    if rest > 0 or #parts == 0 then parts[#parts + 1] = escape.decimal(rest, 3) .. " s" end
    return table.concat(parts, " ")
end

-- What a span of windows is made of: each moment belongs to the window whose centre is nearest, and to
-- none that lies in a gap. Returns a list of { left, right } on the axis, one for each window. The
-- centre of a window whose ends are numbers on the axis is their mean.
function moments.shares(windows)
    local starts, finishes, centres, n = {}, {}, {}, 0
    for window in windows:each() do
        n = n + 1
        starts[n], finishes[n] = moments.parse(window.start), moments.parse(window.finish)
        centres[n] = (starts[n] + finishes[n]) / 2
    end
    local shares = {}
    for i = 1, n do
        local left, right = starts[i], finishes[i]
        if i > 1 then left = math.max(left, math.min((centres[i - 1] + centres[i]) / 2, right)) end
        if i < n then right = math.max(left, math.min(right, (centres[i] + centres[i + 1]) / 2)) end
        shares[i] = { left, right }
    end
    return shares
end

return moments
