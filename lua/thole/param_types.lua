--- The types of a recipe's parameters: values from the words of the command line.

local nearest = require "thole.nearest"

local SECONDS_UNITS = { "ns", "us", "ms", "s", "sec", "second", "seconds", "min", "minute", "minutes", "h",
    "hour", "hours", "d", "day", "days", "w", "week", "weeks" }
local is_unit = {}
for _, unit in ipairs(SECONDS_UNITS) do
    is_unit[unit] = true
end

-- Each function gives the value of a text, or nil and what is wrong with it.

local function to_number(text)
    if text:find("[^%d%.eE+-]") then -- no blanks, hexadecimal digits, "inf" or "nan"
        return nil, "is not a number"
    end
    local value = tonumber(text)
    if not value then
        return nil, "is not a number"
    elseif value == math.huge or value == -math.huge then
        return nil, "is too large a number"
    end
    return value
end

local function to_integer(text)
    local value = to_number(text)
    value = value and math.tointeger(value)
    if not value then
        return nil, "is not a whole number"
    end
    return value
end

local BOOLEANS = { ["true"] = true, yes = true, ["false"] = false, no = false }

local function to_boolean(text)
    local value = BOOLEANS[text]
    if value == nil then
        return nil, "is neither true nor false"
    end
    return value
end

-- "20 min", "1 h 30 min", "PT20M", or a bare number in the clock's unit; stays text, because the clock
-- that turns it into ticks comes with the network.
local function to_duration(text)
    if text:find("^P[%dT][%dTWDHMS%.]*$") then
        return text
    end
    if to_number(text) then
        if text:find("^-") then
            return nil, "is less than nothing"
        end
        return text
    end
    local rest, pieces = text, 0
    while rest:find("%S") do
        local unit, after = rest:match("^%s*%d+%.?%d*%s*(%a+)(.*)$")
        if not unit then
            return nil, "is not a duration"
        elseif not is_unit[unit] then
            local near = nearest.name(unit, SECONDS_UNITS)
            return nil, ('is not a duration, because of "%s"%s'):format(unit,
                near and (': did you mean "%s"?'):format(near) or "")
        end
        rest, pieces = after, pieces + 1
    end
    if pieces == 0 then
        return nil, "is not a duration"
    end
    return text
end

local function to_text(text)
    return text
end

local function to_file(text)
    if text == "" then
        return nil, "is not the name of a file"
    end
    return text
end

-- "0,1" or "ferry, bus": numbers where all the default's items are, text where they are text, and otherwise
-- numbers where they look so.
local function to_list(text, param)
    local list = {}
    if not text:find("%S") then
        return list
    end
    for piece in (text .. ","):gmatch("(.-),") do
        piece = piece:match("^%s*(.-)%s*$")
        local number, why
        if param.items ~= "text" then
            number, why = to_number(piece)
            if not number and param.items == "number" then
                return nil, ('has "%s", which %s'):format(piece, why)
            end
        end
        list[#list + 1] = number or piece
    end
    return list
end

-- from: the value of a word; lua: the Lua type of a default; example: what stands for a value in a command
-- line; want: what to give instead of a wrong one.
local TYPES = {
    boolean = { from = to_boolean, lua = "boolean", example = "true", want = "true or false" },
    duration = { from = to_duration, example = "'20 min'", want = "a duration" },
    file = { from = to_file, lua = "string", example = "FILE", want = "the name of a file" },
    integer = { from = to_integer, lua = "number", example = "1", want = "a whole number" },
    list = { from = to_list, lua = "table", example = "A,B", want = "items with commas between" },
    number = { from = to_number, lua = "number", example = "0.5", want = "a number" },
    text = { from = to_text, lua = "string", example = "TEXT", want = "a text" },
}
local NAMES = { "boolean", "duration", "file", "integer", "list", "number", "text" }

--- What all items of a default list are: "number", "text", or "any" when they differ or there are none.
local function items_kind(list)
    local numbers, texts = 0, 0
    for _, item in ipairs(list) do
        numbers = numbers + (type(item) == "number" and 1 or 0)
        texts = texts + (type(item) == "string" and 1 or 0)
    end
    return #list > 0 and (numbers == #list and "number" or texts == #list and "text") or "any"
end

--- The type that a default shows. Durations are told from other texts by their units, so that "20 minuts"
-- is refused at once.
local function inferred(default)
    if type(default) == "string" then
        return default:find("^%d") and default:find("%a") and to_duration(default) and "duration" or "text"
    elseif type(default) == "number" then
        return "number"
    elseif type(default) == "boolean" then
        return "boolean"
    elseif type(default) == "table" then
        return "list"
    end
    return "text"
end

return {
    types = TYPES, names = NAMES, items_kind = items_kind, inferred = inferred,
    is_duration = function(text) return to_duration(text) ~= nil end,
}
