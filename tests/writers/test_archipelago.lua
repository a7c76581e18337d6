-- The demo week: the generator gives the committed bytes again, and the week holds what it is said to hold.

package.path = "tests/writers/?.lua;" .. package.path
local check = require "check"

local function slurp(path)
    local file = assert(io.open(path, "rb"))
    local text = file:read("a")
    file:close()
    return text
end

local folder = os.tmpname()
os.remove(folder)
assert(os.execute("mkdir " .. folder))
assert(os.execute("lua5.4 recipes/data/make_archipelago.lua " .. folder))
for _, name in ipairs { "archipelago-week.csv", "archipelago-places.csv" } do
    check.truthy(slurp(folder .. "/" .. name) == slurp("recipes/data/" .. name), name .. " is not what "
        .. "its generator makes")
    os.remove(folder .. "/" .. name)
end
os.remove(folder)

local places, islands = {}, {}
for line in io.lines("recipes/data/archipelago-places.csv") do
    local name, latitude, longitude, island = line:match("^([^,]+),([%d.-]+),([%d.-]+),([^,]+)$")
    if name then
        check.truthy(not places[name], name .. " comes twice")
        places[name] = island
        islands[island] = true
        -- Open sea, a long way from any coast.
        check.truthy(42 < tonumber(latitude) and tonumber(latitude) < 43, name .. " is elsewhere")
        check.truthy(-37 < tonumber(longitude) and tonumber(longitude) < -35, name .. " is elsewhere")
    end
end
local function size(set)
    local n = 0
    for _ in pairs(set) do n = n + 1 end
    return n
end
check.equal(size(places), 25)
check.equal(size(islands), 7)

local OUTER = { F4 = true, F5 = true, L1 = true, L2 = true, L3 = true, Stacks = true }
local by_day, modes, seen, used = {}, {}, {}, {}
local rows, self_loops, repeats, outer_thursday, night, previous = 0, 0, 0, 0, 0, ""
for line in io.lines("recipes/data/archipelago-week.csv") do
    local from, to, departs, arrives, mode, name, seats, booked =
        line:match("^([^,]+),([^,]+),([^,]+),([^,]+),([^,]+),([^,]+),(%d+),(%d*)$")
    if from then
        rows = rows + 1
        check.truthy(places[from] and places[to], "a row names a place that is not there")
        used[from], used[to] = true, true
        check.truthy(departs < arrives, "a row arrives before it departs")
        check.truthy(previous <= departs, "rows are out of order")
        previous = departs
        check.equal(departs:sub(-6), "-01:00")
        if booked ~= "" then check.truthy(tonumber(booked) <= tonumber(seats), "more bookings than seats") end
        check.equal(booked == "", mode == "bus", "bookings")
        local day, hour = departs:match("^2031%-03%-(%d%d)T(%d%d)")
        by_day[day] = (by_day[day] or 0) + 1
        modes[mode] = (modes[mode] or 0) + 1
        if hour >= "01" and hour < "05" then night = night + 1 end
        if day == "06" and OUTER[name] then outer_thursday = outer_thursday + 1 end
        if from == to then
            self_loops = self_loops + 1
        else
            local key = (from < to and from .. to or to .. from) .. departs .. arrives
            if seen[key] then repeats = repeats + 1 end
            seen[key] = true
        end
    end
end
check.equal(rows, 7391)
check.equal(size(used), 25)
check.equal(size(modes), 3)
check.equal(night, 0, "runs in the night pause")
check.equal(outer_thursday, 0, "outer crossings in the storm")
check.equal(self_loops, 6, "trips that come back to their quay")
check.truthy(repeats >= 3, "no relief boats")
check.truthy(by_day["09"] * 2 < by_day["03"], "Sunday is not thin")
check.truthy(by_day["06"] < by_day["05"], "the storm takes nothing away")

check.finish()
