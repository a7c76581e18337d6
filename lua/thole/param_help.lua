--- The help that a recipe gives about its parameters, and parameters and values as text.

local types = require("thole.param_types").types

local function show(value)
    if type(value) == "table" then
        local items = {}
        for i, item in ipairs(value) do
            items[i] = tostring(item)
        end
        return table.concat(items, ",")
    end
    return tostring(value)
end

local function show_range(param)
    if param.min and param.max then
        return ("%s to %s"):format(param.min, param.max)
    elseif param.min then
        return ("%s or more"):format(param.min)
    elseif param.max then
        return ("%s or less"):format(param.max)
    end
end

-- A word as the shell takes it for one.
local function quoted(word)
    if word == "" or word:find("[^%w_%-%.,/:+@%%]") then
        return "'" .. word:gsub("'", "'\\''") .. "'"
    end
    return word
end

local function example(param)
    if param.one_of then
        return param.name .. "=" .. quoted(show(param.one_of[1]))
    elseif param.default ~= nil then
        return param.name .. "=" .. quoted(show(param.default))
    end
    return param.name .. "=" .. types[param.type].example
end

-- Lines of at most `width` bytes, broken at blanks.
local function wrapped(text, width)
    local lines, line = {}, ""
    for word in text:gmatch("%S+") do
        if line ~= "" and #line + 1 + #word > width then
            lines[#lines + 1], line = line, word
        else
            line = line == "" and word or line .. " " .. word
        end
    end
    lines[#lines + 1] = line
    return lines
end

local function meaning(param)
    local parts = { param.help }
    if param.one_of then
        parts[#parts + 1] = "one of " .. show(param.one_of):gsub(",", ", ")
    end
    parts[#parts + 1] = show_range(param)
    return table.concat(parts, "; ")
end

local function example_line(run, params, order)
    local words = { run.command }
    for _, name in ipairs(order) do
        if params[name].needed then
            words[#words + 1] = example(params[name])
        end
    end
    if #words == 1 and order[1] then
        words[2] = example(params[order[1]])
    end
    return table.concat(words, " ")
end

local function help_text(run, params, order)
    local lines = {}
    if run.description ~= "" then
        lines = { run.description, "" }
    end
    if #order == 0 then
        lines[#lines + 1] = "This recipe has no parameters."
        return table.concat(lines, "\n")
    end
    local rows, width = { { "name", "type", "default", "meaning" } }, { 0, 0, 0 }
    for _, name in ipairs(order) do
        local param = params[name]
        local default = param.needed and "needed" or param.default == nil and "none" or show(param.default)
        rows[#rows + 1] = { name, param.type, default, meaning(param) }
    end
    for _, row in ipairs(rows) do
        for i = 1, 3 do
            width[i] = math.max(width[i], utf8.len(row[i]) or #row[i])
        end
    end
    lines[#lines + 1] = "Parameters, given as name=value:"
    local indent = width[1] + width[2] + width[3] + 8
    for _, row in ipairs(rows) do
        local line = ""
        for i = 1, 3 do
            line = line .. "  " .. row[i] .. (" "):rep(width[i] - (utf8.len(row[i]) or #row[i]))
        end
        for i, part in ipairs(wrapped(row[4], math.max(30, 100 - indent))) do
            lines[#lines + 1] = ((i == 1 and line or (" "):rep(indent - 2)) .. "  " .. part):gsub("%s+$", "")
        end
    end
    lines[#lines + 1] = "\nFor example: " .. example_line(run, params, order)
    return table.concat(lines, "\n")
end

-- The comment that a recipe begins with, without its dashes.
local function description(path)
    local lines = {}
    local file = io.open(path, "r")
    if file then
        for line in file:lines() do
            local text = line:match("^%-%-%-?%s?(.*)$")
            if text then
                lines[#lines + 1] = text
            elseif not line:find("^#!") then
                break
            end
        end
        file:close()
    end
    return table.concat(lines, "\n")
end

return {
    description = description, show = show, show_range = show_range,
    example = example, example_line = example_line, text = help_text,
}
