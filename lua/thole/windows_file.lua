-- Windows from a file of delimited text: a header that names start, finish and perhaps label, then a window
-- a line. Comma, semicolon or tab; quotes as RFC 4180 has them; byte-order mark and CR LF are accepted;
-- lines before the header that begin with "#", and blank lines, are passed over, and so are other columns.

local native = require "thole.native"

-- Taken now: the host takes them away from the tables that recipes could reach.
local open, stdin = io.open, io.stdin

local windows_file = {}

local OF = "thole.windows.list"

local function slurp(path)
    if path == "-" then return stdin:read("a") end
    local file, why = open(path, "rb")
    if not file then native.fail(("cannot read %s"):format(why:gsub("^(.*): (%u)(.*)$",
        function(name, first, rest)
        return ('"%s": %s%s'):format(name, first:lower(), rest)
    end))) end
    local text, fault = file:read("a")
    file:close()
    if not text then native.fail(('cannot read "%s": %s'):format(path, fault)) end
    return text
end

-- Iterator of records: number of their first line, list of fields. where(line, column, text) raises.
local function records(text, separator, where)
    local at, line = 1, 1
    -- One field from `at` on, and what ends it: the separator, "\n" or "" for the end of the text.
    local function field(start_line)
        if text:sub(at, at) ~= '"' then
            local value = text:match("^[^" .. separator .. "\n]*", at)
            at = at + #value
            return (value:gsub("\r$", ""))
        end
        local parts = {}
        at = at + 1
        while true do
            local part = text:match('^[^"]*', at)
            at = at + #part
            parts[#parts + 1] = part
            for _ in part:gmatch("\n") do line = line + 1 end
            if text:sub(at, at) == "" then where(start_line, nil,
                "a quote is opened but not closed: close it") end
            at = at + 1
            if text:sub(at, at) ~= '"' then break end
            parts[#parts + 1], at = '"', at + 1
        end
        if text:sub(at, at) == "\r" then at = at + 1 end
        local after = text:sub(at, at)
        if after ~= "" and after ~= "\n" and after ~= separator then
            where(start_line, nil,
                ('"%s" follows a closing quote: double quotes inside of quoted text'):format(after))
        end
        return table.concat(parts)
    end
    return function()
        while text:match("^\r?\n", at) do
            at, line = at + #text:match("^\r?\n", at), line + 1
        end
        if at > #text then return nil end
        local start_line, fields = line, {}
        while true do
            fields[#fields + 1] = field(start_line)
            local ending = text:sub(at, at)
            at = at + 1
            if ending ~= separator then
                line = line + 1
                return start_line, fields
            end
        end
    end
end

-- The separator that stands most often in the header; comma when there is none.
local function separator_of(header)
    local best, most = ",", 0
    for _, candidate in ipairs { ",", ";", "\t" } do
        local _, times = header:gsub(candidate, "")
        if times > most then best, most = candidate, times end
    end
    return best
end

function windows_file.read(net, given)
    local path = native.readable(given, OF)
    local text = slurp(path):gsub("^\239\187\191", "")
    local function where(line, column, words)
        native.fail(("%s:%d:%s %s"):format(given, line, column and column .. ":" or "", words))
    end
    -- Remarks before the header keep their line, as blank ones.
    local before = text:match("^[\r\n]*#[^\n]*\n?")
    while before do
        text = before:gsub("[^\n]", "") .. text:sub(#before + 1)
        before = text:match("^[\r\n]*#[^\n]*\n?")
    end
    if not utf8.len(text) then
        local _, bad = utf8.len(text)
        local _, line = text:sub(1, bad - 1):gsub("\n", "")
        where(line + 1, nil, "this line is not UTF-8: save the file as UTF-8")
    end
    local next_record = records(text, separator_of(text:match("[^\r\n]+") or ""), where)
    local line, header = next_record()
    if not line then native.fail(("%s: this file is empty: give a header start,finish and a window a line"):format(given)) end
    local column = {}
    for i, name in ipairs(header) do column[name] = column[name] or i end
    for _, name in ipairs { "start", "finish" } do
        if not column[name] then
            where(line, nil,
                ('there is no column "%s": name the columns start, finish and perhaps label in the first line')
                :format(name))
        end
    end

    local starts, finishes, labels, n = {}, {}, {}, 0
    for at, fields in next_record do
        if #fields ~= #header then
            where(at, nil, ("%d fields where the header has %d"):format(#fields, #header))
        end
        n = n + 1
        for name, list in pairs { start = starts, finish = finishes } do
            local ticks, why = native.ticks(net, fields[column[name]])
            if not ticks then where(at, column[name], why) end
            list[n] = ticks
        end
        labels[n] = column.label and fields[column.label] or ""
        if labels[n]:find("\0", 1, true) then where(at, column.label, "a label has a NUL byte in it") end
    end
    if n == 0 then native.fail(("%s: this file has a header but no windows"):format(given)) end
    return native.list_windows(net, starts, finishes, labels, n)
end

return windows_file
