#!/usr/bin/env lua5.4
-- Make the reference for people, and the stub for editors, from the description:
--
--     lua5.4 lua/thole/describe.lua docs/recipe-reference.md lua/thole/library/thole.lua
--
-- With one path, only that one; the suffix tells which it is.

package.path = "lua/?.lua;" .. package.path
local api = require "thole.api"

---------------------------------------------------------------------------------------------------
-- For people.

local function anchor(title)
    return (title:lower():gsub("[^%w ]", ""):gsub(" ", "-"))
end

local function cell(text)
    return (text:gsub("\n", " "):gsub("|", "\\|"))
end

local function table_of(out, head, rows)
    out[#out + 1] = "| " .. table.concat(head, " | ") .. " |"
    out[#out + 1] = "|" .. ("---|"):rep(#head)
    for _, row in ipairs(rows) do out[#out + 1] = "| " .. table.concat(row, " | ") .. " |" end
    out[#out + 1] = ""
end

local function code(out, kind, text)
    out[#out + 1] = "```" .. kind
    out[#out + 1] = text
    out[#out + 1] = "```"
    out[#out + 1] = ""
end

local function add_entry(out, entry)
    local title = api.call(entry)
    out[#out + 1] = ("### `%s`%s"):format(title, entry.type and " : " .. api.words(entry.type) or "")
    out[#out + 1] = ""
    out[#out + 1] = entry.text
    out[#out + 1] = ""
    if entry.args and #entry.args > 0 then
        local rows = {}
        for i, arg in ipairs(entry.args) do
            rows[i] = { ("`%s`"):format(arg[1]), api.words(arg[2])
                .. (arg.optional and ", or left out" or ""), cell(arg[3]) }
        end
        table_of(out, { "argument", "type", "meaning" }, rows)
    end
    if entry.options then
        local rows = {}
        for i, option in ipairs(entry.options) do
            rows[i] = { ("`%s`"):format(option[1]), api.words(option[2]), cell(option[3] or "–"),
                cell(option[4]) }
        end
        table_of(out, { entry.options_of and "key of " .. entry.options_of or "option", "type", "default",
            "meaning" }, rows)
    end
    for _, value in ipairs(entry.returns or {}) do
        out[#out + 1] = ("- Returns %s: %s."):format(api.words(value[1]), value[2])
    end
    for _, mistake in ipairs(entry.errors or {}) do out[#out + 1] = ("- Refuses %s."):format(mistake) end
    if entry.returns or entry.errors then out[#out + 1] = "" end
    if entry.example then
        code(out, "lua", entry.example)
        if entry.prints ~= "" then code(out, "text", entry.prints) end
    end
end

-- Fields of one class stand in one table.
local function add_fields(out, class, entries)
    out[#out + 1] = ("### Fields of a %s"):format(class:match("%.(%a+)$"):lower())
    out[#out + 1] = ""
    local rows = {}
    for i, entry in ipairs(entries) do
        rows[i] = { ("`%s`"):format(entry.name), api.words(entry.type), cell(entry.text) }
    end
    table_of(out, { "field", "type", "meaning" }, rows)
end

local function reference()
    local out = {
        "# What recipes can call", "",
        "This page is made by `lua/thole/describe.lua`; change `lua/thole/api*.lua` and run it. `thole.help(\"net:keep\")`",
        "prints an entry of it.", "",
    }
    for _, group in ipairs(api.groups) do
        out[#out + 1] = ("- [%s](#%s)"):format(group.title, anchor(group.title))
    end
    out[#out + 1] = ""
    for _, about in ipairs(api.about) do
        out[#out + 1] = ("**%s.** %s"):format(about[1], about[2])
        out[#out + 1] = ""
    end
    out[#out + 1] = "Every example goes on from these lines, by itself:"
    out[#out + 1] = ""
    code(out, "lua", (api.before:gsub("\n$", "")))
    for _, group in ipairs(api.groups) do
        out[#out + 1] = "## " .. group.title
        out[#out + 1] = ""
        if group.text then
            out[#out + 1] = group.text
            out[#out + 1] = ""
        end
        local i = 1
        while group[i] do
            local class, fields = group[i].class, {}
            while class and group[i] and group[i].class == class and group[i].type do
                fields[#fields + 1] = group[i]
                i = i + 1
            end
            if #fields > 0 then
                add_fields(out, class, fields)
            else
                add_entry(out, group[i])
                i = i + 1
            end
        end
    end
    return table.concat(out, "\n"):gsub("\n+$", "\n")
end

---------------------------------------------------------------------------------------------------
-- For editors: annotations as the Lua language server reads them.

local function one_line(text)
    return (text:gsub("%s*\n%s*", " "))
end

local function add_comment(out, text)
    for line in (text .. "\n"):gmatch("(.-)\n") do out[#out + 1] = "--- " .. line end
end

local function add_example(out, entry)
    if not entry.example then return end
    out[#out + 1] = "--- ```lua"
    add_comment(out, entry.example)
    out[#out + 1] = "--- ```"
end

-- "thole.windows.sliding" -> "thole.SlidingOptions"
local function options_class(entry)
    local word = entry.name:match("[%w_]+$"):gsub("_(%a)", string.upper):gsub("^%a", string.upper)
    local owner = entry.name:match("^(%a+):")
    return ("thole.%s%sOptions"):format(owner == "bars" and "Bars" or "", word)
end

local function add_options_class(out, entry)
    if not entry.options then return end
    out[#out + 1] = ("---@class %s"):format(options_class(entry))
    for _, option in ipairs(entry.options) do
        local needed = option[3] == "needed"
        out[#out + 1] = ("---@field %s%s %s %s%s"):format(option[1], needed and "" or "?",
            api.code(option[2]),
            one_line(option[4]), (not needed and option[3]) and (" (default: %s)"):format(option[3]) or "")
    end
    out[#out + 1] = ""
end

local function add_function(out, entry, path)
    add_options_class(out, entry)
    add_comment(out, entry.text)
    add_example(out, entry)
    local names = {}
    for i, arg in ipairs(entry.args) do
        names[i] = arg[1]
        local type = arg[1] == "options" and options_class(entry) or api.code(arg[2])
        out[#out + 1] = ("---@param %s%s %s %s"):format(arg[1], arg.optional and "?" or "", type,
            one_line(arg[3]))
    end
    for _, value in ipairs(entry.returns or {}) do
        out[#out + 1] = ("---@return %s # %s"):format(api.code(value[1]), one_line(value[2]))
    end
    out[#out + 1] = ("function %s(%s) end"):format(path, table.concat(names, ", "))
    out[#out + 1] = ""
end

-- Classes in the order of the description, each with its fields, then its methods.
local function add_classes(out)
    local order, fields, methods = {}, {}, {}
    local function class_of(entry, group)
        local class = entry.class or group.class
        if not fields[class] then
            order[#order + 1], fields[class], methods[class] = class, {}, {}
        end
        return class
    end
    for _, group in ipairs(api.groups) do
        for _, entry in ipairs(group) do
            if not entry.name:find("^thole%.") then
                local class = class_of(entry, group)
                local kind = entry.args and methods or fields
                kind[class][#kind[class] + 1] = entry
            end
        end
    end
    for _, class in ipairs(order) do
        local variable = class:match("%a+$")
        out[#out + 1] = "---@class " .. class
        for _, entry in ipairs(fields[class]) do
            local name = entry.name:match("%.([%w_]+)$")
            local known = api.code(entry.type)
            if entry.name:find("<", 1, true) then
                out[#out + 1] = ("---@field [string] %s %s"):format(known, one_line(entry.text))
            elseif entry.name:find("[", 1, true) then
                out[#out + 1] = ("---@field [integer] %s %s"):format(known, one_line(entry.text))
            elseif entry.name:sub(1, 1) == "#" then
                out[#out + 1] = ("---@operator len: %s"):format(known)
            else
                out[#out + 1] = ("---@field %s %s %s"):format(name, known, one_line(entry.text))
            end
        end
        out[#out + 1] = ("local %s = {}"):format(variable)
        out[#out + 1] = ""
        for _, entry in ipairs(methods[class]) do
            add_function(out, entry, variable .. ":" .. entry.name:match(":(.*)$"))
        end
    end
end

local function stub()
    local out = {
        "---@meta thole", "",
        "-- For editors only: names, types and units. Made by lua/thole/describe.lua from lua/thole/api*.lua.", "",
    }
    for _, about in ipairs(api.about) do
        local alias = ({ Times = "---@alias thole.Time string|number",
            Durations = "---@alias thole.Duration string|number" })[about[1]]
        if alias then
            add_comment(out, about[2])
            out[#out + 1] = alias
            out[#out + 1] = ""
        end
    end
    out[#out + 1] = "---@alias thole.Filter table<string, any>"
    out[#out + 1] = "---@class thole.Needed"
    out[#out + 1] = ""
    add_classes(out)
    out[#out + 1] = "local thole = { windows = {} }"
    out[#out + 1] = ""
    for _, group in ipairs(api.groups) do
        for _, entry in ipairs(group) do
            if entry.name:find("^thole%.") and entry.args then
                add_function(out, entry, entry.name)
            elseif entry.name:find("^thole%.") then
                add_comment(out, entry.text)
                out[#out + 1] = "---@type " .. api.code(entry.type)
                out[#out + 1] = entry.name .. " = nil"
                out[#out + 1] = ""
            end
        end
    end
    out[#out + 1] = "return thole"
    return table.concat(out, "\n") .. "\n"
end

---------------------------------------------------------------------------------------------------

local MAKERS = { md = reference, lua = stub }

-- As a program, write the files named; required, hand out the texts.
if arg and arg[0] and arg[0]:find("describe%.lua$") then
    for _, path in ipairs(arg) do
        local file = assert(io.open(path, "wb"))
        file:write((MAKERS[path:match("%a+$")]()))
        file:close()
    end
end
return MAKERS
