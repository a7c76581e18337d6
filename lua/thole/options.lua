-- Tables of options as the Lua half takes them: a key that is not known, or a value of the wrong type,
-- is refused at the recipe's line, with the nearest name.

local native = require "thole.native"
local nearest = require "thole.nearest"

local options = {}

-- A value's type for messages and checks: "barcode", "network" or "windows" for things of Thole, else Lua's.
function options.kind(value)
    local meta = getmetatable(value)
    local name = type(meta) == "table" and rawget(meta, "__name")
    return type(name) == "string" and name:match("^thole%.(%a+)") or type(value)
end

-- "a barcode", "an output".
function options.article(kind)
    return (kind:find("^[aeiou]") and "an " or "a ") .. kind
end

-- opts: the table given, or nil. known: name -> kind; "!" after it: must be there. where: the function's
-- name for messages. List items (1, 2, …) are not looked at when items is true.
function options.check(opts, known, where, items)
    if opts == nil then opts = {} end
    if type(opts) ~= "table" then
        native.fail(("%s takes its options in a table, not in %s"):format(where, options.article(type(opts))))
    end
    for key, value in pairs(opts) do
        local wanted = type(key) == "string" and known[key]
        if wanted then
            wanted = wanted:match("^%a+")
            local kind = options.kind(value)
            if kind ~= wanted then
                native.fail(('option "%s" of %s must be %s, not %s'):format(key, where,
                    options.article(wanted), options.article(kind)))
            end
        elseif not (items and math.type(key) == "integer") then
            local names = {}
            for name in pairs(known) do names[#names + 1] = name end
            table.sort(names)
            native.fail(('%s has no option "%s"%s'):format(where, tostring(key),
                #names > 0 and ": " .. nearest.hint(tostring(key), names) or ""))
        end
    end
    for name, kind in pairs(known) do
        if kind:find("!$") and opts[name] == nil then
            native.fail(("%s needs %s = …, %s"):format(where, name, options.article(kind:match("^%a+"))))
        end
    end
    return opts
end

return options
