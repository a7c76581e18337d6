-- Run the tests of the Lua interface, in the stock interpreter or in the host:
--
--     LUA_CPATH=build/?.so lua5.4 tests/lua/run.lua [only=NAME]
--     build/thole run --trust tests/lua/run.lua [only=NAME]

local FILES = { "times", "network", "contacts", "filters", "windows", "barcode", "output", "lifetimes",
    "threads",
    "describe" }

package.path = "tests/lua/?.lua;" .. package.path
local thole = require "thole"
local harness = require "harness"

local p = thole.params { only = { "", help = "run the tests of this file alone" } }
for _, name in ipairs(FILES) do
    if p.only == "" or p.only == name then require("test_" .. name) end
end
os.exit(harness.run())
