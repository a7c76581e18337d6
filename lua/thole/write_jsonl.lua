-- JSON Lines: one JSON object (RFC 8259) a line, its members in the order of the columns. A missing
-- value is null. Numbers are written exactly as in CSV, times of a calendar clock as text.

local escape = require "thole.escape"
local native = require "thole.native"
local rows = require "thole.write_rows"

local function value(cell, column)
    local kind = type(cell)
    if kind == "nil" then return "null" end
    if kind == "boolean" then return tostring(cell) end
    if kind == "string" then return column.numeric and cell or escape.json(cell) end
    if kind ~= "number" then
        native.fail(("a %s cannot stand in a table: write text, a number, true or false"):format(kind))
    end
    if cell ~= cell or cell == math.huge or cell == -math.huge then
        native.fail(('column "%s" holds %s, which JSON has no number for: leave it out, or write it as text')
                :format(column.name, escape.number(cell)))
    end
    return escape.number(cell)
end

return function(thing, out)
    local columns, next_row = rows.of(thing)
    local keys, members = {}, {}
    for i, column in ipairs(columns) do keys[i] = escape.json(column.name) .. ":" end
    for row in next_row do
        for i = 1, #columns do members[i] = keys[i] .. value(row[i], columns[i]) end
        out:write("{", table.concat(members, ","), "}\n")
    end
end
