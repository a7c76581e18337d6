-- A barcode, windows and a network made of Lua tables, in the shapes that the core hands out.

local stand_in = {}

local function iso(seconds, offset)
    local local_time = os.date("!%Y-%m-%dT%H:%M:%S", seconds + offset)
    if offset == 0 then return local_time .. "+00:00" end
    return ("%s%s%02d:%02d"):format(local_time, offset < 0 and "-" or "+", math.abs(offset) // 3600,
        math.abs(offset) % 3600 // 60)
end
stand_in.iso = iso

-- list: { { start, finish, label }, … } in numbers. offset_at: nil for a plain clock, else function(instant)
-- giving seconds east of UTC.
function stand_in.windows(list, offset_at)
    local windows = { numbers = list }
    local function time(t) return offset_at and iso(t, offset_at(t)) or t end
    for i, pair in ipairs(list) do
        windows[i] = { start = time(pair[1]), finish = time(pair[2]), label = pair[3] or "", index = i }
    end
    function windows.each()
        local i = 0
        return function()
            i = i + 1
            return windows[i]
        end
    end
    windows.time = time
    return setmetatable(windows, { __name = "thole.windows" })
end

local function centre(windows, position)
    local function of(i) return (windows.numbers[i][1] + windows.numbers[i][2]) / 2 end
    local low = math.floor(position)
    if low == position then return of(low) end
    return (of(low) + of(low + 1)) / 2
end
stand_in.centre = centre

-- bars: list of { dim, first, last, kind }, in order.
function stand_in.barcode(windows, bars, more)
    local barcode = { windows = windows, radius = "graph", join = "union", dims = { 0, 1 },
        cells = { [0] = 4, 3 }, peak_bytes = 1000, zone = type(windows[1].start) == "string" and "UTC" or nil,
        unit = "s" }
    for key, value in pairs(more or {}) do barcode[key] = value end
    local list = {}
    for i, bar in ipairs(bars) do
        local birth, death = centre(windows, bar[2]), centre(windows, bar[3])
        local whole = math.tointeger(death - birth)
        list[i] = { dim = bar[1], first = bar[2], last = bar[3], kind = bar[4], index = i,
            birth = windows.time(birth), death = windows.time(death), lifespan = whole or death - birth,
            opens = windows[math.floor(bar[2])].start, closes = windows[math.ceil(bar[3])].finish,
            join_only = bar[2] == bar[3] and bar[2] % 1 ~= 0, numbers = { birth, death } }
    end
    barcode.list = list
    function barcode.each(_, filter)
        filter = filter or {}
        local chosen = {}
        for _, bar in ipairs(list) do
            if not filter.dim or bar.dim == filter.dim then chosen[#chosen + 1] = bar end
        end
        if filter.longest then
            table.sort(chosen, function(a, b)
                if a.lifespan ~= b.lifespan then return a.lifespan > b.lifespan end
                return a.index < b.index
            end)
            for i = #chosen, filter.longest + 1, -1 do chosen[i] = nil end
        end
        local i = 0
        return function()
            i = i + 1
            return chosen[i]
        end
    end
    function barcode.count(self, filter)
        local n = 0
        for _ in self:each(filter) do n = n + 1 end
        return n
    end
    function barcode.betti(_, dim)
        local numbers = {}
        for i = 1, #windows do
            numbers[i] = 0
            for _, bar in ipairs(list) do
                if bar.dim == dim and bar.first <= i and i <= bar.last then numbers[i] = numbers[i] + 1 end
            end
        end
        return numbers
    end
    function barcode.text(_, index, field) return tostring(list[index][field]) end
    return setmetatable(barcode, { __name = "thole.barcode", __len = function() return #list end })
end

local KINDS = { "closed-closed", "closed-open", "open-closed", "open-open" }

-- Random bars over n windows, `random` as math.random.
function stand_in.random_bars(random, n, count)
    local bars = {}
    for i = 1, count do
        local a, b = random(0, 2 * n - 2), random(0, 2 * n - 2)
        if a > b then a, b = b, a end
        local function position(p) return p % 2 == 0 and 1 + p // 2 or 1 + p / 2 end
        bars[i] = { random(0, 1), position(a), position(b), KINDS[random(4)] }
    end
    table.sort(bars, function(x, y)
        for k = 1, 4 do
            if x[k] ~= y[k] then return x[k] < y[k] end
        end
        return false
    end)
    return bars
end

-- A network of given events { from, to, start, finish, attribute = value }.
function stand_in.network(events, columns, summary)
    local net = { columns = columns or {} }
    function net.each()
        local i = 0
        return function()
            i = i + 1
            local e = events[i]
            if not e then return nil end
            local link = { from = e[1], to = e[2], start = e[3], finish = e[4] }
            for _, name in ipairs(net.columns) do link[name] = e[name] end
            return link
        end
    end
    function net.summary() return summary end
    return setmetatable(net, { __name = "thole.network", __len = function() return #events end })
end

return stand_in
