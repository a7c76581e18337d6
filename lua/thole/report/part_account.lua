-- { "account", net = net }: what was read, what was set aside and why, what was kept with a remark.

local escape = require "thole.escape"
local moments = require "thole.moments"
local page = require "thole.report.page"

-- "1 row", "2 rows".
local function counted(n, one, many)
    return escape.count(n) .. " " .. (n == 1 and one or many)
end

local function tallies(caption, list)
    if #list == 0 then return "" end
    local rows = {}
    for i, tally in ipairs(list) do
        rows[i] = { page.name(tally.what), escape.count(tally.count),
                tally.first_line > 0 and escape.count(tally.first_line) or "–" }
    end
    return page.table(caption, { { "what", whole = true }, { "how many", number = true },
            { "first in line", number = true } },
            rows)
end

return function(part)
    local s = part.net:summary()
    local facts = {
        { "Read from", page.name(s.source) },
        { "Rows", ("%s, of which %s became links of the network"):format(escape.count(s.rows),
                escape.count(s.events)) },
        { "Network", ("%s and %s that were linked at some time"):format(counted(s.nodes, "place", "places"),
                counted(s.links, "pair", "pairs")) },
    }
    if s.first then
        facts[#facts + 1] = { "First and last", ("%s to %s"):format(moments.name(s.first, true),
                moments.name(s.last, true)) }
    end
    if s.zone or type(s.first) == "string" then
        facts[#facts + 1] = { "Times", ("local time in %s"):format(page.name(s.zone or "UTC")) }
    else
        facts[#facts + 1] = { "Times", ("plain numbers, in %s"):format(page.name(s.unit or "s")) }
    end
    if s.contacts > 0 then
        facts[#facts + 1] = { "Contacts", counted(s.contacts, "link", "links") .. " of a single instant" }
    end
    local aside = {
        { "Set aside", counted(s.self_loops, "row", "rows") .. " whose two ends are the same place" },
        { "Set aside", s.skipped == 0 and "no row as faulty"
                or counted(s.skipped, "faulty row", "faulty rows") .. ", by reason below" },
        { "Kept", counted(s.repeats, "row that repeats", "rows that repeat")
                .. " another in both ends and both times" },
    }
    for _, fact in ipairs(aside) do facts[#facts + 1] = fact end
    return "What was read, and what was set aside",
        page.facts(facts) .. tallies("Faulty rows that were set aside", s.reasons or {}) ..
        tallies("Kept, with a remark", s.remarks or {})
end
