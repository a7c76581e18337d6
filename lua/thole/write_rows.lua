-- What Thole can write, seen as a table: named columns and one row after another. CSV and JSON Lines
-- are two spellings of it.
--
-- rows.of(thing) returns
--   columns: list of { name = …, numeric = true|nil }; numeric: the column's text is a number
--   next_row: iterator that gives one list of cells a row. A cell is a string, a number, a boolean or nil
--     (missing); in a numeric column a string is the exact text of a number.

local options = require "thole.options"

local rows = {}

local BAR_COLUMNS = { "dim", "first", "last", "kind", "birth", "death", "opens", "closes" }

-- Bars in their own order, times and positions as exact text.
local function of_barcode(bars)
    local columns = {}
    local calendar = type(bars.windows[1].start) == "string"
    for i, name in ipairs(BAR_COLUMNS) do
        local time = i >= 5
        columns[i] = { name = name, numeric = name ~= "kind" and not (time and calendar) }
    end
    local next_bar, state, control = bars:each()
    return columns, function()
        local bar = next_bar(state, control)
        control = bar
        if not bar then return nil end
        local at = bar.index
        return { bar.dim, bars:text(at, "first"), bars:text(at, "last"), bar.kind, bars:text(at, "birth"),
                bars:text(at, "death"), bars:text(at, "opens"), bars:text(at, "closes") }
    end
end

local function of_network(net)
    local names = { "from", "to", "start", "finish" }
    for _, name in ipairs(net.columns) do names[#names + 1] = name end
    local columns = {}
    for i, name in ipairs(names) do columns[i] = { name = name } end
    local next_link, state, control = net:each()
    return columns, function()
        local link = next_link(state, control)
        control = link
        if not link then return nil end
        local row = {}
        for i, name in ipairs(names) do row[i] = link[name] end
        return row
    end
end

local function of_windows(windows)
    local i = 0
    return { { name = "start" }, { name = "finish" }, { name = "label" } }, function()
        i = i + 1
        local window = i <= #windows and windows[i] or nil
        return window and { window.start, window.finish, window.label }
    end
end

local function of_table(thing)
    local columns = {}
    for i, name in ipairs(thing.columns) do columns[i] = { name = tostring(name) } end
    local i = 0
    return columns, function()
        i = i + 1
        return thing.rows[i]
    end
end

local MAKERS = { barcode = of_barcode, network = of_network, windows = of_windows, table = of_table }

-- What a thing is: "barcode", "network", "windows", "table" (with columns and rows), "text", or nil.
function rows.kind(thing)
    if type(thing) == "string" then return "text" end
    local kind = options.kind(thing)
    if kind ~= "table" then return MAKERS[kind] and kind or nil end
    if type(thing.columns) == "table" and type(thing.rows) == "table" then return "table" end
    return nil
end

function rows.of(thing)
    return MAKERS[rows.kind(thing)](thing)
end

return rows
