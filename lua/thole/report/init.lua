-- thole.report(path, parts): one self-contained HTML file, made of parts in the order in which the
-- recipe lists them. It fetches nothing and needs no script.
--
--     thole.report("week.html", { title = "A week", lead = "…",
--       { "account", net = net }, { "barcode", { bars } }, { "caution" } })
--
-- A part is a table whose first item names it; what else it takes stands at the head of its file.

local native = require "thole.native"
local nearest = require "thole.nearest"
local options = require "thole.options"
local page = require "thole.report.page"

-- A new part is a file and a line here. takes: what it needs ("!") and what it may be given, by kind; list:
-- the kind of the first item of each table in its list, or "string". The function gets the part and an id,
-- and returns a title and HTML, or nothing when the part does not apply.
local PARTS = {
    account = { make = require "thole.report.part_account", takes = { net = "network!" } },
    barcode = { make = require "thole.report.part_barcode", list = "barcode",
        each = { title = "string", dims = "table" } },
    betti = { make = require "thole.report.part_betti", list = "barcode",
        each = { dim = "number!", label = "string!" } },
    caution = { make = require "thole.report.part_caution", list = "string" },
    days = { make = require "thole.report.part_days", takes = { net = "network!", bars = "barcode!" } },
    diagram = { make = require "thole.report.part_diagram", list = "barcode",
        each = { dim = "number!", title = "string" } },
    findings = { make = require "thole.report.part_findings", takes = { bars = "barcode!" } },
    longest = { make = require "thole.report.part_longest",
        takes = { bars = "barcode!", dim = "number!", most = "number", net = "network" } },
    method = { make = require "thole.report.part_method",
        takes = { recipe = "string!", parameters = "table!", net = "network!", bars = "table!" } },
    text = { make = require "thole.report.part_text", list = "string" },
}

local function check_item(item, entry, where)
    if entry.list == "string" then
        if type(item) ~= "string" then
            native.fail(("%s takes paragraphs, not %s"):format(where, options.article(options.kind(item))))
        end
        return
    end
    if type(item) ~= "table" or options.kind(item[1]) ~= entry.list then
        native.fail(("%s takes a list of tables that begin with %s: { bars, … }"):format(where,
            options.article(entry.list)))
    end
    options.check(item, entry.each, where, true)
end

-- The entry of a part, once all that it was given is in order.
local function entry_of(part, i)
    local name = type(part) == "table" and part[1]
    if type(name) ~= "string" then
        native.fail(('part %d of a report must be a table that begins with its name, as { "account", net '
            .. '= net }')
            :format(i))
    end
    local entry = PARTS[name]
    if not entry then
        local names = {}
        for known in pairs(PARTS) do names[#names + 1] = known end
        table.sort(names)
        native.fail(('a report has no part "%s": %s'):format(name, nearest.hint(name, names)))
    end
    local where = ('part "%s"'):format(name)
    local takes = { title = "string" }
    for key, kind in pairs(entry.takes or {}) do takes[key] = kind end
    options.check(part, takes, where, true)
    for k = 2, #part do
        if not entry.list then native.fail(("%s takes no list"):format(where)) end
        check_item(part[k], entry, where)
    end
    if entry.list == "barcode" and #part < 2 then
        native.fail(("%s needs a list of { bars, … }"):format(where))
    end
    return entry
end

return function(path, parts)
    if type(path) ~= "string" then native.fail("the name of the file to write must be text") end
    options.check(parts, { title = "string", lead = "string" }, "thole.report", true)
    if not parts or #parts == 0 then native.fail("a report needs a list of parts") end
    local sections = {}
    for i, part in ipairs(parts) do
        local entry = entry_of(part, i)
        local id = ("%s-%d"):format(part[1], i)
        local title, html = entry.make(part, id)
        if title then sections[#sections + 1] = { id = id, title = part.title or title, html = html } end
    end
    local footer = ("Made by Thole %s. This page holds everything that it shows; it fetches nothing and "
        .. "runs no "
        .. "script."):format(native.version)
    local html = page.document(parts.title or "Report", parts.lead, sections, footer)
    local out <close> = native.create(path)
    out:write(html)
    out:commit()
end
