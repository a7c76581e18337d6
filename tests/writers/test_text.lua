-- Text for CSV, JSON and XML, numbers as text, times and durations in words.

package.path = "tests/writers/?.lua;" .. package.path
local check = require "check"
check.without_core()
local escape = require "thole.escape"
local moments = require "thole.moments"

-- RFC 4180, section 2: rules 5 to 7, with their examples.
check.equal(escape.csv("aaa"), "aaa")
check.equal(escape.csv('b"bb'), '"b""bb"')
check.equal(escape.csv("b\r\nbb"), '"b\r\nbb"')
check.equal(escape.csv("a,b"), '"a,b"')
check.equal(escape.csv(""), "")

-- RFC 8259, section 7: quotation mark, reverse solidus and U+0000 to U+001F must be escaped, no more.
check.equal(escape.json('a"b\\c/d'), '"a\\"b\\\\c/d"')
check.equal(escape.json("\0\n\31\127é"), '"\\u0000\\n\\u001f\127é"')
for code = 0, 31 do
    check.truthy(not escape.json(string.char(code)):find("%c"), "control character " .. code
        .. " stays in JSON")
end

-- XML 1.0, section 2.2: of the control characters only tab, line feed and carriage return are allowed.
check.equal(escape.xml([[<a href="x">'&amp;]]), "&lt;a href=&quot;x&quot;&gt;&#39;&amp;amp;")
for code = 0, 31 do
    local kept = code == 9 or code == 10 or code == 13
    check.equal(escape.xml(string.char(code)), kept and string.char(code) or "\u{FFFD}")
end
check.equal(escape.xml("\u{FFFE}\u{FFFF}"), "\u{FFFD}\u{FFFD}")
check.equal(escape.isolated("\u{5D0}"), "\u{2068}\u{5D0}\u{2069}")

-- Any bytes become valid UTF-8, and valid UTF-8 stays.
check.equal(escape.utf8("a\255b\xC3"), "a\u{FFFD}b\u{FFFD}")
check.equal(escape.utf8("Ærø – \u{1F6A2}"), "Ærø – \u{1F6A2}")
for _ = 1, check.cases(300) do
    local bytes = {}
    for i = 1, check.random(0, 12) do bytes[i] = string.char(check.random(0, 255)) end
    local text = table.concat(bytes)
    check.truthy(utf8.len(escape.utf8(text)), "bytes that are not UTF-8 remain")
end

-- Numbers read back as they were, whatever the bits; no shorter text would.
check.equal(escape.number(3.0), "3")
check.equal(escape.number(0.1), "0.1")
check.equal(escape.number(-7), "-7")
check.equal(escape.number(math.maxinteger), "9223372036854775807")
for _ = 1, check.cases(2000) do
    local x = string.unpack("<d", string.pack("<i8", check.random(0)))
    if x == x and x ~= math.huge and x ~= -math.huge then check.equal(tonumber(escape.number(x)), x) end
end
check.equal(escape.decimal(12.345, 2), "12.35")
check.equal(escape.decimal(-0.25, 2), "-0.25")
check.equal(escape.decimal(0.004, 2), "0")
check.equal(escape.decimal(7.999, 2), "8")
check.equal(escape.decimal(2.5, 0), "3")
for _ = 1, check.cases(500) do
    local x = (check.random() - 0.5) * 10 ^ check.random(-2, 6)
    check.near(tonumber(escape.decimal(x, 3)), x, 0.000501)
end
for _, pair in ipairs { { 0, "0" }, { 999, "999" }, { 1000, "1,000" }, { 1234567, "1,234,567" },
    { -1000, "-1,000" } } do
    check.equal(escape.count(pair[1]), pair[2])
end

-- Dates against the C library's, over some 5,000 years.
for _ = 1, check.cases(2000) do
    local seconds = check.random(-60000000000, 100000000000)
    local broken = os.date("!*t", seconds)
    local days = seconds // 86400
    local year, month, day = moments.date(days)
    check.equal(year, broken.year)
    check.equal(month, broken.month)
    check.equal(day, broken.day)
    check.equal(moments.days(year, month, day), days)
    check.equal(moments.weekday(days) % 7 + 1, broken.wday) -- there Sunday is 1
end

local seconds, offset = moments.parse("2031-03-03T06:20:00-01:00")
check.equal(seconds, 1930288800) -- date -u -d 2031-03-03T07:20:00Z +%s
check.equal(offset, -3600)
check.equal((moments.parse("2031-03-03T07:20:00Z")), 1930288800)
check.equal((moments.parse("2031-03-03T06:20:00.5-01:00")), 1930288800.5)
check.equal((moments.parse("2031-03-03T12:50:00+05:30")), 1930288800)
check.equal(moments.parse(12.5), 12.5)
check.fails(function() moments.parse("soon") end, "not a time")
check.equal(moments.name("2031-03-03T06:20:00-01:00"), "Mon 3 Mar 06:20")
check.equal(moments.name("2031-03-09T23:59:30-01:00", true), "Sunday 9 March 2031 23:59:30")
check.equal(moments.local_day("2031-03-03T23:30:00-01:00"), moments.days(2031, 3, 3))
check.equal(moments.local_day("2031-03-03T00:30:00+02:00"), moments.days(2031, 3, 3))

for _, pair in ipairs { { 0, "0 s" }, { 59, "59 s" }, { 60, "1 min" }, { 5400, "1 h 30 min" },
    { 3605, "1 h 5 s" },
    { 235800, "65 h 30 min" }, { 864000, "10 d" }, { 954060.5, "11 d 1 h 1 min 0.5 s" },
        { -60, "-1 min" } } do
    check.equal(moments.duration(pair[1]), pair[2])
end
check.equal(moments.duration(2.5, "week"), "2.5 week")

check.finish()
