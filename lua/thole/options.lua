-- Tables of options as the Lua half takes them: a key that is not known, or a value of the wrong type,
-- is refused with the nearest name.

local nearest = require "thole.nearest"

local options = {}

-- opts: what was given (nil: nothing). known: name -> type as type() calls it. where: the function's name
-- for messages. level: as in error(), counted from the caller of check; 2 unless told.
function options.check(opts, known, where, level)
    level = (level or 2) + 1
    if opts == nil then return {} end
    if type(opts) ~= "table" then
        error(("%s takes its options in a table, not in a %s"):format(where, type(opts)), level)
    end
    for key, value in pairs(opts) do
        if type(key) ~= "string" or not known[key] then
            local names = {}
            for name in pairs(known) do names[#names + 1] = name end
            table.sort(names)
            error(('%s has no option "%s": %s'):format(where, tostring(key),
                    nearest.hint(tostring(key), names)), level)
        end
        if type(value) ~= known[key] then
            error(('option "%s" of %s must be a %s, not a %s'):format(key, where, known[key], type(value)),
                    level)
        end
    end
    return opts
end

return options
