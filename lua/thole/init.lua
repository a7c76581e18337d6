-- The table that recipes see.

local native = require "thole.native"
local nearest = require "thole.nearest"
local params = require "thole.params"

require "thole.methods"

local thole = {
    version = native.version,
    needed = params.needed,
    params = params.params,
    read_contacts = native.read_contacts,
    network = native.network,
    windows = require "thole.windows",
    write = require "thole.write",
    report = require "thole.report",
    threads = native.threads,
    help = function(name) return require("thole.help")(name) end,
}

-- A misspelt name is an error that says so, not a nil that fails elsewhere.
local function guard(module, shown)
    return setmetatable(module, {
        __index = function(_, key)
            local names = {}
            for name in pairs(module) do names[#names + 1] = name end
            table.sort(names)
            native.fail(('%s has no "%s": %s'):format(shown, tostring(key),
                nearest.hint(tostring(key), names)))
        end,
    })
end

guard(thole.windows, "thole.windows")
return guard(thole, "thole")
