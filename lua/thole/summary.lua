-- How the table of net:summary() prints.

local function line(out, name, text)
    out[#out + 1] = ("%-12s %s"):format(name, text)
end

-- 12345 -> "12,345"
local function number(n)
    local text = tostring(n):reverse():gsub("(%d%d%d)", "%1,"):reverse()
    return (text:gsub("^,", ""))
end

local function tallies(out, title, list)
    if #list == 0 then return end
    out[#out + 1] = title
    for _, tally in ipairs(list) do
        local where = tally.first_line > 0 and (", first in line %s"):format(number(tally.first_line)) or ""
        out[#out + 1] = ("  %s: %s%s"):format(tally.what, number(tally.count), where)
    end
end

local meta = {}

function meta.__tostring(s)
    local out = {}
    line(out, "source", s.source)
    line(out, "rows", ("%s, of which %s became links"):format(number(s.rows), number(s.read)))
    line(out, "set aside", ("%s faulty, %s from a place to itself"):format(number(s.skipped),
        number(s.self_loops)))
    line(out, "in view", ("%s links, %s of them contacts; %s places, %s pairs linked at some time"):format(
        number(s.events), number(s.contacts), number(s.nodes), number(s.links)))
    line(out, "repeats", ("%s, kept"):format(number(s.repeats)))
    if s.first then line(out, "from, to", ("%s, %s"):format(tostring(s.first), tostring(s.last))) end
    line(out, "times", s.zone and ("local time in %s"):format(s.zone)
        or ("plain numbers, in %s"):format(s.unit))
    line(out, "memory", ("%s bytes"):format(number(s.bytes)))
    tallies(out, "set aside as faulty", s.reasons)
    tallies(out, "kept, with a remark", s.remarks)
    return table.concat(out, "\n")
end

return function(summary)
    return setmetatable(summary, meta)
end
