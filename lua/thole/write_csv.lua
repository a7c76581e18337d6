-- CSV as RFC 4180 has it, but with lines that end in LF alone: a header, then one row a line. A missing
-- value is an empty field. Numbers have a decimal point, times are ISO 8601 with offset.

local escape = require "thole.escape"
local native = require "thole.native"
local rows = require "thole.write_rows"

local function field(cell)
    local kind = type(cell)
    if kind == "nil" then return "" end
    if kind == "number" then return escape.number(cell) end
    if kind == "string" then return escape.csv(cell) end
    if kind == "boolean" then return tostring(cell) end
    native.fail(("a %s cannot stand in a table: write text, a number, true or false"):format(kind))
end

return function(thing, out)
    local columns, next_row = rows.of(thing)
    local line = {}
    for i, column in ipairs(columns) do line[i] = escape.csv(column.name) end
    out:write(table.concat(line, ","), "\n")
    for row in next_row do
        for i = 1, #columns do line[i] = field(row[i]) end
        -- A lone empty field would be a blank line, which readers pass over.
        out:write(#columns == 1 and line[1] == "" and '""' or table.concat(line, ","), "\n")
    end
end
