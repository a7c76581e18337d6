-- Text made fit for CSV, JSON, HTML and SVG, and numbers as text whatever the locale says.
--
-- HTML and SVG take only characters that XML 1.0 (section 2.2) allows; what it forbids, and bytes that are
-- not UTF-8, become U+FFFD, so that a strange name can spoil neither the page nor its neighbours.

local escape = {}

local REPLACEMENT = "\u{FFFD}"

-- The text with every byte that is not part of valid UTF-8 replaced.
function escape.utf8(text)
    if utf8.len(text) then return text end
    local out, at = {}, 1
    while at <= #text do
        local good, bad = utf8.len(text, at)
        if good then
            out[#out + 1] = text:sub(at)
            break
        end
        out[#out + 1] = text:sub(at, bad - 1)
        out[#out + 1] = REPLACEMENT
        at = bad + 1
    end
    return table.concat(out)
end

local ENTITY = { ["&"] = "&amp;", ["<"] = "&lt;", [">"] = "&gt;", ['"'] = "&quot;", ["'"] = "&#39;" }

-- For the text and the attribute values of XML and HTML alike.
function escape.xml(text)
    text = escape.utf8(tostring(text))
    text = text:gsub("[%z\1-\8\11\12\14-\31]", REPLACEMENT)
    text = text:gsub("\u{FFFE}", REPLACEMENT):gsub("\u{FFFF}", REPLACEMENT)
    return (text:gsub("[&<>\"']", ENTITY))
end

-- A name inside a sentence of XML text where no element can go (a title): kept apart from its
-- surroundings by FIRST STRONG ISOLATE and POP DIRECTIONAL ISOLATE, so that a name written right to
-- left leaves the figures after it in place.
function escape.isolated(text)
    return "\u{2068}" .. escape.xml(text) .. "\u{2069}"
end

-- One field of a CSV row, quoted where RFC 4180 asks for it.
function escape.csv(text)
    if text:find('[",\r\n]') then return '"' .. text:gsub('"', '""') .. '"' end
    return text
end

local SHORT = { ['"'] = '\\"', ["\\"] = "\\\\", ["\b"] = "\\b", ["\f"] = "\\f", ["\n"] = "\\n",
    ["\r"] = "\\r", ["\t"] = "\\t" }

-- A JSON string (RFC 8259), quotes and all.
function escape.json(text)
    return '"' .. escape.utf8(text):gsub('[%c"\\]', function(c)
        return SHORT[c] or c ~= "\127" and ("\\u%04x"):format(c:byte()) or nil
    end) .. '"'
end

-- A number as the shortest text that reads back as the same number; whole floats without ".0".
-- string.format follows the locale's decimal sign; a recipe may have set one that is not a point.
function escape.number(x)
    if math.type(x) == "integer" then return ("%d"):format(x) end
    if x ~= x then return "nan" end
    if x == math.huge then return "inf" end
    if x == -math.huge then return "-inf" end
    local text
    for digits = 15, 17 do
        text = ("%." .. digits .. "g"):format(x)
        if tonumber(text) == x then break end
    end
    return (text:gsub(",", "."))
end

-- A number with at most `places` decimals, rounded half up, for drawing: "12.5", "-0.25", "3".
function escape.decimal(x, places)
    local unit = 10 ^ (places or 2)
    local scaled = math.floor(x * unit + 0.5)
    local whole = math.tointeger(scaled) or 0
    unit = math.tointeger(unit)
    local sign = whole < 0 and "-" or ""
    if whole < 0 then whole = -whole end
    local fraction = ("%0" .. (places or 2) .. "d"):format(whole % unit):gsub("0+$", "")
    if (places or 2) == 0 or fraction == "" then return sign .. ("%d"):format(whole // unit) end
    return sign .. ("%d.%s"):format(whole // unit, fraction)
end

-- A count with its thousands parted, for people: 1,234,567.
function escape.count(n)
    local text = ("%d"):format(n)
    local sign, digits = text:match("^(-?)(%d+)$")
    return sign .. digits:reverse():gsub("(%d%d%d)", "%1,"):reverse():gsub("^,", "")
end

return escape
