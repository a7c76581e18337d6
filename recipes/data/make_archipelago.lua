-- Make the demo scenario: one week of ferries, buses and fast launches in the Vessary Isles, an
-- archipelago that does not exist. Run by stock Lua 5.4, from anywhere:
--
--     lua5.4 recipes/data/make_archipelago.lua [FOLDER]
--
-- writes archipelago-week.csv and archipelago-places.csv into FOLDER (default: the folder of this
-- file). The same bytes come out on every machine: the numbers are drawn by the integer
-- generator below, nothing depends on the order of a table's keys, and nothing on the clock.
--
-- What the week holds: a pause every night; a stormy Thursday on which every outer crossing and
-- every launch stays in port and the inner ferries run half their rounds; a market on Saturday; a
-- thin Sunday; relief boats that sail beside the ordinary ones on Friday afternoon (rows that
-- repeat another in both ends and both times); and trips round the stacks that come back to the quay
-- they left (both ends the same).

local folder = arg and arg[1] or (arg and arg[0] or ""):match("^(.*)[/\\][^/\\]*$") or "."

-- A 64-bit linear congruential generator; multiplier and increment are those Knuth gives for MMIX
-- (The Art of Computer Programming, vol. 2, 3.3.4). The upper bits are the good ones.
local state = 20310303
local function below(n)
    state = state * 6364136223846793005 + 1442695040888963407
    return (state >> 33) % n
end

-- ---- places -----------------------------------------------------------------------------------

-- Name, latitude and longitude in degrees (north and east positive), island.
local places = {
    { "Brindle Quay",     42.6105, -35.6210, "Calvessa" },
    { "Customs Steps",    42.6121, -35.6263, "Calvessa" },
    { "Saltmarket",       42.6158, -35.6291, "Calvessa" },
    { "Fennel Bridge",    42.6190, -35.6214, "Calvessa" },
    { "Glasshouse Cross", 42.6147, -35.6142, "Calvessa" },
    { "Hill Chapel",      42.6309, -35.6388, "Calvessa" },
    { "North Strand",     42.6532, -35.6455, "Calvessa" },
    { "Copperbight",      42.6671, -35.6120, "Calvessa" },
    { "Tolmar Haven",     42.5420, -35.3570, "Tolmarrin" },
    { "Weaver's Green",   42.5502, -35.3441, "Tolmarrin" },
    { "Mill Pond",        42.5618, -35.3360, "Tolmarrin" },
    { "Tarn Head",        42.5733, -35.3512, "Tolmarrin" },
    { "Long Jetty",       42.5894, -35.3705, "Tolmarrin" },
    { "Quill Pier",       42.4286, -35.6018, "Quillsay" },
    { "School Lane",      42.4213, -35.6120, "Quillsay" },
    { "Bellfield",        42.4120, -35.6231, "Quillsay" },
    { "Kelp Yard",        42.4004, -35.6409, "Quillsay" },
    { "Ombrey Stair",     42.3460, -35.9904, "Ombrey" },
    { "Windrake",         42.3607, -36.0051, "Ombrey" },
    { "Far Cove",         42.3822, -36.0198, "Ombrey" },
    { "Sorrel Landing",   42.5030, -35.8266, "Sorrelholm" },
    { "Lark Gate",        42.5099, -35.8377, "Sorrelholm" },
    { "Hollow Light",     42.2270, -36.1415, "Hollow Rock" },
    { "Petrel Slip",      42.4415, -36.1893, "Petrelmere" },
    { "Upper Petrel",     42.4492, -36.2010, "Petrelmere" },
}

-- ---- the week ---------------------------------------------------------------------------------

local MONDAY, TUESDAY, WEDNESDAY, THURSDAY, FRIDAY, SATURDAY, SUNDAY = 1, 2, 3, 4, 5, 6, 7
local SAILING = { [MONDAY] = "plain", [TUESDAY] = "plain", [WEDNESDAY] = "plain", [THURSDAY] = "storm",
        [FRIDAY] = "plain", [SATURDAY] = "market", [SUNDAY] = "thin" }

-- Minutes after Monday 00:00 as ISO 8601. The week is 2031-03-03 to 09; Atlantic/Azores is an
-- hour behind UTC on all of its days.
local function iso(minutes)
    local day, rest = minutes // 1440, minutes % 1440
    return ("2031-03-%02dT%02d:%02d:00-01:00"):format(3 + day, rest // 60, rest % 60)
end

local rows = {}

-- One row. Buses take no bookings: the field stays empty.
local function leg(from, to, departs, minutes, mode, line, seats, booked)
    rows[#rows + 1] = { from = from, to = to, departs = departs, arrives = departs + minutes, mode = mode,
            line = line, seats = seats, booked = booked or "", number = #rows + 1 }
end

-- A run along `stops` with `minutes` between neighbours and `dwell` at each stop on the way.
-- `call` gives the bookings of a leg (nil for buses).
local function run(stops, minutes, dwell, departs, mode, line, seats, call)
    local at = departs
    for i = 1, #stops - 1 do
        leg(stops[i], stops[i + 1], at, minutes[i], mode, line, seats, call and call(seats, departs))
        at = at + minutes[i] + dwell
    end
    return at - dwell
end

local function reversed(list)
    local out = {}
    for i = #list, 1, -1 do out[#out + 1] = list[i] end
    return out
end

-- ---- buses ------------------------------------------------------------------------------------

-- every: minutes between runs; offset: minutes after the first hour; both: also the other way.
local buses = {
    { line = "B1", every = 20, offset = 0, seats = 32, dwell = 1,
        stops = { "Brindle Quay", "Customs Steps", "Saltmarket", "Fennel Bridge", "Glasshouse Cross",
                "Brindle Quay" },
        minutes = { 4, 5, 7, 6, 5 } },
    { line = "B2", every = 30, offset = 10, seats = 44, dwell = 1, both = true,
        stops = { "Saltmarket", "Hill Chapel", "North Strand", "Copperbight" }, minutes = { 9, 12, 14 } },
    { line = "B3", every = 60, offset = 25, seats = 44, dwell = 1, both = true,
        stops = { "Glasshouse Cross", "Copperbight" }, minutes = { 22 } },
    { line = "B4", every = 40, offset = 5, seats = 32, dwell = 1, both = true,
        stops = { "Tolmar Haven", "Weaver's Green", "Mill Pond", "Tarn Head", "Long Jetty" },
        minutes = { 6, 7, 8, 9 } },
    { line = "B5", every = 60, offset = 30, seats = 20, dwell = 1, both = true,
        stops = { "Tolmar Haven", "Tarn Head" }, minutes = { 13 } },
    { line = "B6", every = 45, offset = 15, seats = 20, dwell = 1, both = true,
        stops = { "Quill Pier", "School Lane", "Bellfield", "Kelp Yard" }, minutes = { 5, 6, 9 } },
    { line = "B7", every = 60, offset = 20, seats = 16, dwell = 1, both = true,
        stops = { "Ombrey Stair", "Windrake", "Far Cove" }, minutes = { 8, 10 } },
    { line = "B8", every = 90, offset = 40, seats = 16, dwell = 1, both = true,
        stops = { "Sorrel Landing", "Lark Gate" }, minutes = { 6 } },
    { line = "B9", every = 120, offset = 35, seats = 12, dwell = 1, both = true,
        stops = { "Petrel Slip", "Upper Petrel" }, minutes = { 7 } },
}

local function bus_day(day)
    local base, kind = (day - 1) * 1440, SAILING[day]
    local first, last = 5 * 60 + 40, 21 * 60 + 40
    if kind == "thin" then first, last = 8 * 60, 19 * 60 end
    if day == FRIDAY or day == SATURDAY then last = 23 * 60 end
    for _, bus in ipairs(buses) do
        local every = kind == "thin" and bus.every * 2 or bus.every
        if kind == "market" and (bus.line == "B1" or bus.line == "B2") then every = every // 2 end
        local there, back = bus.stops, reversed(bus.stops)
        for at = base + first + bus.offset, base + last, every do
            local arrived = run(there, bus.minutes, bus.dwell, at, "bus", bus.line, bus.seats)
            if bus.both then run(back, reversed(bus.minutes), bus.dwell, arrived + 4, "bus", bus.line,
                    bus.seats) end
        end
    end
end

-- ---- ferries and launches ---------------------------------------------------------------------

-- Bookings: fuller around eight and half past five, and on Friday and Saturday.
local function bookings(seats, departs)
    local hour, day = departs % 1440 // 60, departs // 1440 + 1
    local share = 25 + below(31)
    if hour == 7 or hour == 8 or hour == 17 then share = share + 30 end
    if day == FRIDAY or day == SATURDAY then share = share + 14 end
    return math.min(seats, seats * share // 100)
end

-- `at`: departures of a plain day, "HH:MM"; `market` and `thin` where Saturday and Sunday differ.
-- outer: stays in port in the storm. half: sails every other time in the storm.
local sailings = {
    { line = "F1", mode = "ferry", seats = 180, dwell = 10, half = true,
        stops = { "Brindle Quay", "Tolmar Haven", "Quill Pier", "Brindle Quay" }, minutes = { 45, 40, 50 },
        at = "06:00 07:20 08:40 10:00 11:20 12:40 14:00 15:20 16:40 18:00 19:20",
                thin = "09:00 12:20 15:40 18:00" },
    { line = "F2", mode = "ferry", seats = 180, dwell = 10, half = true,
        stops = { "Brindle Quay", "Quill Pier", "Tolmar Haven", "Brindle Quay" }, minutes = { 50, 40, 45 },
        at = "06:40 08:00 09:20 10:40 12:00 13:20 14:40 16:00 17:20 18:40 20:00",
                thin = "10:20 13:40 17:00" },
    { line = "F3", mode = "ferry", seats = 90, dwell = 15, half = true,
        stops = { "Copperbight", "Long Jetty", "Copperbight" }, minutes = { 40, 40 },
        at = "06:20 08:10 10:00 11:50 13:40 15:30 17:20 19:10", thin = "09:30 13:10 16:50" },
    { line = "F4", mode = "ferry", seats = 90, dwell = 15, outer = true,
        stops = { "Kelp Yard", "Ombrey Stair", "Kelp Yard" }, minutes = { 55, 55 },
        at = "06:30 08:50 11:10 13:30 15:50 18:10", thin = "10:00 15:30" },
    { line = "F5", mode = "ferry", seats = 90, dwell = 20, outer = true,
        stops = { "Copperbight", "Far Cove", "Copperbight" }, minutes = { 65, 65 },
        at = "07:00 10:10 13:20 16:30", thin = "11:00" },
    { line = "L1", mode = "launch", seats = 36, dwell = 5, outer = true,
        stops = { "Brindle Quay", "Sorrel Landing", "Quill Pier", "Sorrel Landing", "Brindle Quay" },
        minutes = { 25, 22, 22, 25 },
        at = "06:50 08:50 10:50 12:50 14:50 16:50 18:50", thin = "10:50 15:50" },
    { line = "L2", mode = "launch", seats = 24, dwell = 5, outer = true,
        stops = { "Ombrey Stair", "Hollow Light", "Petrel Slip", "Hollow Light", "Ombrey Stair" },
        minutes = { 28, 30, 30, 28 }, at = "07:30 10:30 13:30 16:30",
                market = "07:30 09:30 11:30 13:30 15:30 17:30",
        thin = "12:00" },
    { line = "L3", mode = "launch", seats = 24, dwell = 10, outer = true,
        stops = { "Sorrel Landing", "Petrel Slip", "Sorrel Landing" }, minutes = { 38, 38 },
        at = "07:20 11:20 15:20 17:50", thin = "11:20 16:20" },
}

local function sailing_day(day)
    local base, kind = (day - 1) * 1440, SAILING[day]
    for _, boat in ipairs(sailings) do
        local count = 0
        local times = kind == "thin" and boat.thin or kind == "market" and boat.market or boat.at
        for hour, minute in times:gmatch("(%d%d):(%d%d)") do
            count = count + 1
            local stays = kind == "storm" and (boat.outer or boat.half and count % 2 == 0)
            local at = base + tonumber(hour) * 60 + tonumber(minute)
            if not stays then run(boat.stops, boat.minutes, boat.dwell, at, boat.mode, boat.line, boat.seats,
                    bookings) end
            -- Friday afternoon is too full for one boat: a second sails beside it on the first leg.
            if day == FRIDAY and boat.line == "F1" and at - base >= 14 * 60 and at - base < 18 * 60 then
                leg(boat.stops[1], boat.stops[2], at, boat.minutes[1], boat.mode, "F1 relief", 110,
                        bookings(110, at))
            end
        end
    end
    -- Trips round the stacks: from the slip, an hour and a quarter, back to the slip.
    if day == WEDNESDAY or day == SATURDAY or day == SUNDAY then
        for _, hour in ipairs { 13, 15 } do
            leg("Petrel Slip", "Petrel Slip", base + hour * 60 + 10, 75, "launch", "Stacks", 12, 4 + below(9))
        end
    end
end

for day = MONDAY, SUNDAY do
    bus_day(day)
    sailing_day(day)
end

-- By departure, then in the order made: a sort that is stable by its last key.
table.sort(rows, function(a, b)
    if a.departs ~= b.departs then return a.departs < b.departs end
    return a.number < b.number
end)

-- ---- writing ----------------------------------------------------------------------------------

local function write(name, lines)
    local path = folder .. "/" .. name
    local file = assert(io.open(path, "wb"))
    assert(file:write(table.concat(lines, "\n"), "\n"))
    assert(file:close())
end

local lines = { "from,to,departs,arrives,mode,line,seats,booked" }
for _, row in ipairs(rows) do
    lines[#lines + 1] = ("%s,%s,%s,%s,%s,%s,%d,%s"):format(row.from, row.to, iso(row.departs),
            iso(row.arrives),
            row.mode, row.line, row.seats, row.booked)
end
write("archipelago-week.csv", lines)

lines = { "name,latitude,longitude,island" }
for _, place in ipairs(places) do
    lines[#lines + 1] = ("%s,%d.%04d,-%d.%04d,%s"):format(place[1],
        math.floor(place[2]), math.floor(place[2] * 10000 + 0.5) % 10000,
        math.floor(-place[3]), math.floor(-place[3] * 10000 + 0.5) % 10000, place[4])
end
write("archipelago-places.csv", lines)
