-- The report as a page: everything the data hold is text, nothing is fetched, the figures are right.

package.path = "tests/writers/?.lua;" .. package.path
local check = require "check"
check.without_core()
local stand_in = require "stand_in"
local report = require "thole.report"

local NASTY = "</style><script>alert(1)</script> \u{5D0}\u{5D1} & \"q\" 'a' \255\0"

-- Six hours cut into windows of one hour, none overlapping: pieces 1, 1, 2, 0, 1, 0.
local list = {}
for i = 0, 5 do list[#list + 1] = { 1930266000 + i * 3600, 1930269600 + i * 3600 } end
local windows = stand_in.windows(list, function() return -3600 end)
local bars = stand_in.barcode(windows, { { 0, 1, 3, "closed-closed" }, { 0, 2.5, 3, "open-closed" },
    { 0, 5, 5, "closed-closed" }, { 1, 2, 3, "closed-open" } }, { zone = NASTY, peak_bytes = 12345678 })
local net = stand_in.network({ { "a", "b", windows[1].start, windows[2].start } }, {}, {
    rows = 9, events = 5, contacts = 0, nodes = 3, links = 2, first = windows[1].start,
        last = windows[6].finish,
    self_loops = 1, repeats = 2, skipped = 3, reasons = { { what = NASTY, count = 3, first_line = 1234 } },
    remarks = {}, source = NASTY, bytes = 1000, zone = NASTY, unit = "s" })

report("p.html", { title = NASTY, lead = NASTY,
    { "findings", bars = bars }, { "caution", NASTY }, { "days", bars = bars, net = net },
    { "betti", { bars, dim = 0, label = NASTY } }, { "barcode", { bars, title = NASTY } },
    { "diagram", { bars, dim = 1, title = NASTY } }, { "longest", bars = bars, dim = 1 },
    { "longest", bars = stand_in.barcode(windows, {}), dim = 1 }, { "account", net = net },
        { "text", title = NASTY, NASTY },
    { "method", recipe = NASTY, parameters = { [NASTY] = NASTY, dims = { 0, 1 } }, net = net,
        bars = { bars } } })
local html = check.files["p.html"]

check.truthy(utf8.len(html), "the page is not UTF-8")
check.truthy(not html:lower():find("<script", 1, true), "a name became markup")
check.equal(select(2, html:gsub("</style>", "")), 1, "a name closed the style")
check.truthy(not html:find("%z"))
for _, piece in ipairs { "http:", "https:", "src=", "@import", "url(h", "javascript:", "onload",
    "onclick" } do
    check.truthy(not html:find(piece, 1, true), "the page holds " .. piece)
end
for target in html:gmatch('href="([^"]*)"') do check.equal(target:sub(1, 1), "#", "a link leads out of "
    .. "the page") end
for id in html:gmatch('href="#([^"]*)"') do
    check.truthy(html:find(('id="%s"'):format(id), 1, true), "no target for #" .. id)
end
local ids = {}
for id in html:gmatch('%sid="([^"]*)"') do
    check.truthy(not ids[id], "the id " .. id .. " comes twice")
    ids[id] = true
end
check.truthy(html:find("default-src 'none'", 1, true))

-- Three hours in one piece of six; two without a link; in one piece longest from 00:00 to 02:00.
local words = html:gsub("<style>.-</style>", ""):gsub("<[^>]+>", " "):gsub("%s+", " ")
for _, piece in ipairs {
    "3 h in one piece, of the 6 h from the first window to the last (50 %)",
    "2 h without any link (33 %)",
    "The longest unbroken stretch was 2 h, from Mon 3 Mar 00:00 to Mon 3 Mar 02:00",
    "1 h: it was in two pieces or more. 2 at once was the most, first in the window from Mon 3 Mar 02:00 to",
    "1 loop at once was the most",
    "1 row whose two ends are the same place", "3 faulty rows", "1,234", "2 rows that repeat",
    "9, of which 5 became links", "6 windows of 1 h, each starting 1 h after the one before",
    "There are no loops.", "memory at most 20 MB", "cells: 4 of dimension 0, 3 of dimension 1", "timetable, not of what sails", "people licensed for the work",
} do
    check.truthy(words:find(piece, 1, true), "the page does not say: " .. piece)
end
-- Day by day: one day, one link that starts, 3 h in one piece, 1 h in several, 2 h with no link.
check.truthy(not words:find("Longest in one piece", 1, true), "one day is not longer than itself")
check.truthy(words:find("Monday 3 March 1 3 h 1 h 2 h 2 1", 1, true), "the row of the day")
-- The loop: two windows, so an hour from centre to centre.
check.truthy(words:find("1 1 h Mon 3 Mar 01:00 Mon 3 Mar 03:00 2 to 3 closed-open", 1, true),
    "the row of the loop")


-- Three days of one window each: whole, parted, whole.
local three = stand_in.windows({ { 1930266000, 1930269600 }, { 1930352400, 1930356000 },
    { 1930438800, 1930442400 } }, function() return -3600 end)
report("d.html", { { "days", net = net, bars = stand_in.barcode(three, { { 0, 1, 3, "closed-closed" },
    { 0, 2, 2, "open-open" } }) } })
check.truthy(check.files["d.html"]:find("Longest in one piece: 1 h, on Monday 3 March and one other day. " ..
    "Shortest: none, on Tuesday 4 March.", 1, true))

check.fails(function() report("q.html", { { "acount" } }) end, 'did you mean "account"?')
check.fails(function() report("q.html", {}) end, "needs a list of parts")
check.fails(function() report("q.html", { { "longest", bars = bars } }) end, 'part "longest" needs dim = '
    .. '…, a number')
check.fails(function() report("q.html", { { "days", bars = bars, net = bars } }) end, "must be a network, "
    .. "not a barcode")
check.fails(function() report("q.html", { { "betti", { bars, dim = 2, label = "x" } } }) end,
    "dimension 2 is not among")
check.fails(function() report("q.html", { { "betti" } }) end, "needs a list")
check.fails(function() report("q.html", { { "barcode", { net } } }) end, "begin with a barcode")
check.fails(function() report("q.html", { { "text", 12 } }) end, "takes paragraphs, not a number")
check.fails(function() report("q.html", { ttle = "x", { "caution" } }) end, 'did you mean "title"?')
check.equal(check.files["q.html"], nil)

check.finish()
