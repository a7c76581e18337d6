-- thole.report(path, parts): one self-contained HTML file, made of parts in the order in which the
-- recipe lists them. It fetches nothing and needs no script.
--
--     thole.report("week.html", { title = "A week", lead = "…",
--       { "account", net = net }, { "barcode", { bars } }, { "caution" } })
--
-- A part is a table whose first item names it; what else it takes stands at the head of its file.

local native = require "thole.native"
local nearest = require "thole.nearest"
local page = require "thole.report.page"

-- A new part is a file and a line here. Each returns a function(part, id) that gives a title and HTML.
local PARTS = {
    account = require "thole.report.part_account",
    barcode = require "thole.report.part_barcode",
    betti = require "thole.report.part_betti",
    caution = require "thole.report.part_caution",
    days = require "thole.report.part_days",
    diagram = require "thole.report.part_diagram",
    findings = require "thole.report.part_findings",
    longest = require "thole.report.part_longest",
    method = require "thole.report.part_method",
    text = require "thole.report.part_text",
}

local function maker_of(part, i)
    local name = type(part) == "table" and part[1]
    if type(name) ~= "string" then
        error(('part %d of a report must be a table that begins with its name, as { "account", net = net }'):format(i), 3)
    end
    if not PARTS[name] then
        local names = {}
        for known in pairs(PARTS) do names[#names + 1] = known end
        table.sort(names)
        error(('a report has no part "%s": %s'):format(name, nearest.hint(name, names)), 3)
    end
    return PARTS[name]
end

return function(path, parts)
    if type(path) ~= "string" then error("the name of the file to write must be text", 2) end
    if type(parts) ~= "table" or #parts == 0 then error("a report needs a list of parts", 2) end
    local sections = {}
    for i, part in ipairs(parts) do
        local make = maker_of(part, i)
        local id = ("%s-%d"):format(part[1], i)
        local title, html = make(part, id)
        if title then sections[#sections + 1] = { id = id, title = part.title or title, html = html } end
    end
    local footer = ("Made by Thole %s. This page holds everything it shows; it fetches nothing and runs no script.")
            :format(native.version)
    local html = page.document(parts.title or "Report", parts.lead, sections, footer)
    local out <close> = native.create(path)
    out:write(html)
    out:commit()
end
