-- thole.help: entries of the description as plain text.

local api = require "thole.api"
local native = require "thole.native"
local nearest = require "thole.nearest"

local function list(lines)
    for _, group in ipairs(api.groups) do
        lines[#lines + 1] = group.title
        for _, entry in ipairs(group) do
            local first = entry.text:gsub("\n", " "):match("^(.-[%.:;])%s") or entry.text
            lines[#lines + 1] = ("  %-24s %s"):format(entry.name, (first:gsub("[:;]$", ".")))
        end
    end
    lines[#lines + 1] = 'More of one: thole.help("net:keep")'
end

local function add_rows(lines, title, rows)
    for i, row in ipairs(rows or {}) do
        if i == 1 then lines[#lines + 1] = title end
        local default = row[3] and row[4] and (", default %s"):format(row[3]) or ""
        lines[#lines + 1] = ("  %s (%s%s): %s"):format(row[1], api.words(row[2]), default, row[4] or row[3])
    end
end

local function indented(text)
    return "  " .. text:gsub("\n", "\n  ")
end

local function describe(lines, entry)
    lines[#lines + 1] = api.call(entry) .. (entry.type and (": %s"):format(api.words(entry.type)) or "")
    lines[#lines + 1] = (entry.text:gsub("\n", " "))
    local args = {}
    for i, arg in ipairs(entry.args or {}) do args[i] = { arg[1], arg[2], nil, arg[3] } end
    add_rows(lines, "takes", args)
    add_rows(lines, entry.options_of and "keys of " .. entry.options_of or "options", entry.options)
    for _, value in ipairs(entry.returns or {}) do
        lines[#lines + 1] = ("returns %s: %s"):format(api.words(value[1]), value[2])
    end
    for _, mistake in ipairs(entry.errors or {}) do lines[#lines + 1] = "refuses " .. mistake end
    if entry.example then
        lines[#lines + 1] = "example"
        lines[#lines + 1] = indented(entry.example)
    end
end

return function(name)
    local lines = {}
    if name == nil then
        list(lines)
    else
        local entry = type(name) == "string" and api.find(name)
        if not entry then
            native.fail(('there is no help on "%s": %s'):format(tostring(name),
                nearest.hint(tostring(name), api.names())))
        end
        describe(lines, entry)
    end
    print(table.concat(lines, "\n"))
end
