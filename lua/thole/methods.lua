-- What the Lua half adds to methods that are written in C.

local native = require "thole.native"
local summary = require "thole.summary"

local network = native.methods.network

local plain_summary = network.summary

function network.summary(net)
    return summary(plain_summary(net))
end

-- max_memory = "8 GB": bytes as people write them.
local UNITS = { B = 1, kB = 10 ^ 3, KB = 10 ^ 3, MB = 10 ^ 6, GB = 10 ^ 9, TB = 10 ^ 12,
    KiB = 2 ^ 10, MiB = 2 ^ 20, GiB = 2 ^ 30, TiB = 2 ^ 40 }

local function bytes_of(text)
    local number, unit = text:match("^%s*(%d+%.?%d*)%s*(%a*)%s*$")
    local scale = unit == "" and 1 or UNITS[unit]
    local bytes = number and scale and math.tointeger(tonumber(number) * scale // 1)
    if not bytes or bytes < 1 then
        native.fail(('option "max_memory" of net:zigzag: "%s" is not an amount of memory: write for example "8 GB"'):format(text))
    end
    return bytes
end

local plain_zigzag = network.zigzag

function network.zigzag(net, opts)
    if type(opts) == "table" and type(opts.max_memory) == "string" then
        local copy = {}
        for key, value in pairs(opts) do copy[key] = value end
        copy.max_memory = bytes_of(opts.max_memory)
        opts = copy
    end
    return plain_zigzag(net, opts)
end
