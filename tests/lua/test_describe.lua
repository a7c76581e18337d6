-- The description says what there is, all of it and no more; its examples print what it says; the files made
-- from it are up to date.

local thole = require "thole"
local native = require "thole.native"
local api = require "thole.api"
local t = require "harness"
local test, same, raises = t.test, t.same, t.raises

local function sorted(set)
    local out = {}
    for name in pairs(set) do out[#out + 1] = name end
    table.sort(out)
    return out
end

-- Names described, as "keep" of "net:keep", whose prefix is `before` ("net:").
local function described(before)
    local set = {}
    for _, name in ipairs(api.names()) do
        if name:sub(1, #before) == before then
            local rest = name:sub(#before + 1)
            if rest:find("^[%w_]+$") then set[rest] = true end
        end
    end
    return sorted(set)
end

local function set_of(list)
    local set = {}
    for _, name in ipairs(list) do set[name] = true end
    return sorted(set)
end

test("the functions described are those of thole", function()
    local live = {}
    for name in pairs(thole) do live[name] = true end
    live.windows = nil
    same(described("thole."), sorted(live))
    local rules = {}
    for name in pairs(thole.windows) do rules[name] = true end
    same(described("thole.windows."), sorted(rules))
end)

test("the methods described are those of the types", function()
    for before, type in pairs { ["net:"] = "network", ["w:"] = "windows", ["bars:"] = "barcode",
        ["out:"] = "output" } do
        local live = {}
        for name in pairs(native.methods[type]) do live[name] = true end
        same(described(before), sorted(live), "methods of " .. type)
    end
    local types = {}
    for type in pairs(native.methods) do types[type] = true end
    same(sorted(types), { "barcode", "network", "output", "windows" })
end)

test("the fields described are those of the types", function()
    for before, type in pairs { ["net."] = "network", ["bars."] = "barcode", ["link."] = "link" } do
        same(described(before), set_of(native.fields[type]), "fields of " .. type)
    end
    local types = {}
    for type in pairs(native.fields) do types[type] = true end
    same(sorted(types), { "barcode", "link", "network" })
end)

test("the fields described are those of tables", function()
    local net <close> = thole.network({ { "A", "B", "2031-03-03T06:00", "2031-03-03T07:00" } },
        { zone = "Atlantic/Azores" })
    local cuts = thole.windows.sliding(net, { length = "1 h" })
    local bars <close> = net:zigzag { windows = cuts }
    local function keys(of)
        local set = {}
        for name in pairs(of) do set[name] = true end
        return sorted(set)
    end
    same(described("summary."), keys(net:summary()))
    same(described("window."), keys(cuts[1]))
    for bar in bars:each() do same(described("bar."), keys(bar)) end
    local path = t.write("faulty.csv", "from,to,start,finish\nA,B,1,0\nA,B,0,1\n")
    same(described("tally."), keys(thole.read_contacts(path, { faulty = "skip" }):summary().reasons[1]))
end)

-- A call with an option that is near to none: the refusal lists those that are known.
local function known_options(call)
    local fine, why = pcall(call, { ["?"] = 1 })
    t.truth(not fine, "that an unknown option is refused")
    local list = why:match("known are (.*)$")
    t.truth(list, "that the known ones are listed: " .. tostring(why))
    local set = {}
    for name in list:gmatch("[%w_]+") do set[name] = true end
    return sorted(set)
end

test("the options described are those that are known", function()
    local net <close> = thole.network { { "A", "B", 0, 1 } }
    local cuts = thole.windows.sliding(net, { length = 1 })
    local bars <close> = net:zigzag { windows = cuts }
    local calls = {
        ["thole.read_contacts"] = function(o) thole.read_contacts("none.csv", o) end,
        ["thole.network"] = function(o) thole.network({}, o) end,
        ["thole.write"] = function(o) thole.write("none.csv", bars, o) end,
        ["thole.windows.sliding"] = function(o) thole.windows.sliding(net, o) end,
        ["net:zigzag"] = function(o) net:zigzag(o) end,
        ["bars:each"] = function(o) bars:each(o) end,
        ["bars:count"] = function(o) bars:count(o) end,
        ["bars:betti"] = function(o) bars:betti(0, o) end,
        ["bars:carriers"] = function(o) bars:carriers(net, o) end,
    }
    for _, name in ipairs(api.names()) do
        local entry = api.find(name)
        if entry.options and not entry.options_of then
            t.truth(calls[name], "that the options of " .. name .. " are compared")
            local set = {}
            for _, option in ipairs(entry.options) do set[option[1]] = true end
            same(known_options(calls[name]), sorted(set), "options of " .. name)
            calls[name] = nil
        end
    end
    same(sorted(calls), {})
end)

test("the parts of a report that are described are those that are known", function()
    local fine, why = pcall(thole.report, t.folder() .. "a.html", { { "?" } })
    local list = not fine and why:match("known are (.*)$")
    t.truth(list, tostring(why))
    for name in list:gmatch("[%w_]+") do
        t.truth(api.find("thole.report").text:gsub("%s+", " "):find(('{ "%s"'):format(name), 1, true),
            ("that part %s is described"):format(name))
    end
end)

test("every entry says what it is", function()
    for _, name in ipairs(api.names()) do
        local entry = api.find(name)
        t.truth(entry.text:find("%.$"), name .. ": that the text ends in a full stop")
        t.truth((entry.type ~= nil) ~= (entry.args ~= nil), name .. ": that it is a field or a function")
        if entry.type then api.words(entry.type) end
        local is_example_due = entry.args and name ~= "out:commit" and name ~= "out:close"
        t.truth(not is_example_due or (entry.example and entry.prints), name .. ": that it has an example")
        for _, arg in ipairs(entry.args or {}) do t.truth(api.words(arg[2]) ~= "" and arg[3], name
            .. ": arguments") end
        for _, option in ipairs(entry.options or {}) do t.truth(api.words(option[2]) ~= "" and option[4], name
            .. ": options") end
    end
end)

-- Run an example with `print` collected and with files kept in this run's folder.
local function run_example(name, text)
    local printed = {}
    local function collect(...)
        local words = table.pack(...)
        for i = 1, words.n do words[i] = tostring(words[i]) end
        printed[#printed + 1] = table.concat(words, "\t")
    end
    local registry, host, own_print = debug.getregistry(), package.loaded["thole.host"], print
    local gate = registry["thole.gate"]
    registry["thole.gate"] = function(path) return t.folder() .. path end
    package.loaded["thole.host"] = { words = {}, recipe = "recipe.lua", command = "thole run recipe.lua",
        description = "" }
    _G.print = collect
    local fine, why = xpcall(assert(load(api.before .. text, "=" .. name)), debug.traceback)
    _G.print = own_print
    registry["thole.gate"], package.loaded["thole.host"] = gate, host
    if not fine then error(("the example of %s fails: %s"):format(name, why)) end
    return table.concat(printed, "\n")
end

test("every example prints what it is said to", function()
    local threads = thole.threads()
    for _, name in ipairs(api.names()) do
        local entry = api.find(name)
        if entry.example then same(run_example(name, entry.example), entry.prints, "what the example of "
            .. name .. " prints") end
    end
    thole.threads(threads)
end)

test("help knows every name, and the nearest to one that it does not", function()
    local all = run_example("help", "thole.help()")
    for _, name in ipairs(api.names()) do
        t.truth(all:find(name, 1, true), "that help lists " .. name)
        t.truth(#run_example("help", ("thole.help(%q)"):format(name)) > #name, "help on " .. name)
    end
    same(run_example("help", 'thole.help("sliding")'):match("^[^\n]*"), "thole.windows.sliding(net, options)")
    raises('there is no help on "net:kep": did you mean "net:keep"?', function() thole.help("net:kep") end)
end)

test("the files made from the description are up to date", function()
    local makers = dofile("lua/thole/describe.lua")
    t.truth(makers.md() == t.read("docs/recipe-reference.md"),
        "that docs/recipe-reference.md is what describe.lua makes")
    t.truth(makers.lua() == t.read("lua/thole/library/thole.lua"), "that the stub is what describe.lua makes")
    assert(load(makers.lua(), "=stub", "t"))
end)
