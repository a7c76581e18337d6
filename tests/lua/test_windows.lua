-- Window rules: known lists, and every refusal.

local thole = require "thole"
local t = require "harness"
local test, same, raises = t.test, t.same, t.raises

local NET = thole.network { { "A", "B", 0, 60 }, { "B", "C", 30, 100 } }

-- "0-10 5-15", with labels after a colon.
local function shown(windows)
    local out = {}
    for w in windows:each() do
        out[#out + 1] = ("%s-%s%s"):format(w.start, w.finish, w.label ~= "" and ":" .. w.label or "")
        same(w.index, #out)
        same(w, windows[#out])
    end
    same(#windows, #out)
    return table.concat(out, " ")
end

local function sliding(opts, net) return shown(thole.windows.sliding(net or NET, opts)) end

test("sliding windows over the span of the data", function()
    same(sliding { length = 50 }, "0-50 50-100")
    same(sliding { length = 40 }, "0-40 40-80 80-120")
    same(sliding { length = 50, overlap = 0.5 }, "0-50 25-75 50-100")
    same(sliding { length = 50, step = 30 }, "0-50 30-80 60-110")
    same(sliding { length = 10, step = "40 s" }, "0-10 40-50 80-90")
    same(sliding { length = 1000 }, "0-1000")
end)

test("sliding windows over a span that is given", function()
    same(sliding { length = 10, start = 85 }, "85-95 95-105")
    same(sliding { length = 10, start = -5, finish = 10 }, "-5-5 5-15")
    same(sliding { length = 30, overlap = 0.9, start = 0, finish = 33 }, "0-30 3-33")
    same(sliding { length = 0.3, start = 0, finish = 0.9 }, "0-0.3 0.3-0.6 0.6-0.9")
end)

test("an overlap is exact to the tick", function()
    same(sliding { length = 1, overlap = 0.333333333, start = 0, finish = 1.5 },
        "0-1 0.666666667-1.666666667")
    -- 3 * 10^-9 long, a third less: 2.000000001 ticks are 2
    same(#thole.windows.sliding(NET, { length = 3e-9, overlap = 0.333333333, start = 0, finish = 7e-9 }), 3)
    -- as long as ticks allow: the share of it does not overflow
    same(sliding { length = 9000000000, overlap = 0.999999999, start = 0, finish = 9000000001 },
        "0-9000000000 9-9000000009")
end)

test("a contact at the very end is in a window", function()
    local net <close> = thole.network { { "A", "B", 0 }, { "B", "C", 10 } }
    same(sliding({ length = 5 }, net), "0-5 5-10 10-15")
    local alone <close> = thole.network { { "A", "B", 7 } }
    same(sliding({ length = 5 }, alone), "7-12")
    same(sliding({ length = 5, finish = 10 }, net), "0-5 5-10")
end)

test("calendar windows have local times", function()
    local net <close> = thole.network({ { "A", "B", "2031-03-30T00:00", "2031-03-30T03:00" } },
        { zone = "Atlantic/Azores" })
    -- clocks go forward on that day, from 00:00-01:00 to 01:00+00:00
    same(sliding({ length = "1 h", start = "2031-03-29T23:00", finish = "2031-03-30T02:00" }, net),
        "2031-03-29T23:00:00-01:00-2031-03-30T01:00:00+00:00 2031-03-30T01:00:00+00:00-2031-03-30T02:00:00+00:00")
end)

test("lists of windows by place and by name", function()
    same(shown(thole.windows.list(NET, { { 0, 10 }, { 10, 20, "second" }, { start = 15, finish = "40.5",
        label = "third" } })),
        "0-10 10-20:second 15-40.5:third")
    same(shown(thole.windows.list(NET, { { 0, 100 }, { 0, 101 }, { 5, 6, 7 } })), "0-100 0-101 5-6:7")
end)

test("windows out of order, or empty, are named", function()
    for text, list in pairs { ["window 2"] = { { 5, 10 }, { 0, 20 } }, ["window 3"] = { { 0, 1 }, { 1, 2 },
        { 3, 3 } } } do
        local fine, why = pcall(thole.windows.list, NET, list)
        t.truth(not fine and why:find(text, 1, true), tostring(why))
    end
end)

test("a rule that yields", function()
    same(shown(thole.windows.by(NET, function(i, start, finish)
        same({ i, start, finish }, { 1 })
        for hour = 0, 2 do
            local n, last_start, last_finish = coroutine.yield(hour * 10, hour * 10 + 15, "w" .. hour)
            same({ n, last_start, last_finish }, { hour + 2, hour * 10, hour * 10 + 15 })
        end
    end)), "0-15:w0 10-25:w1 20-35:w2")
end)

test("a rule that is called again and again", function()
    same(shown(thole.windows.by(NET, function(i, _, last_finish)
        local start = last_finish or 0
        if i <= 3 then return start, start + i end
    end)), "0-1 1-3 3-6")
end)

test("a rule may be run in a coroutine of its own caller", function()
    local co = coroutine.wrap(function()
        local w = thole.windows.by(NET, function() coroutine.yield(0, 5) coroutine.yield(5, 10) end)
        coroutine.yield(#w)
        return "end"
    end)
    same({ co(), co() }, { 2, "end" })
end)

test("an error in a rule is raised as it is", function()
    raises("no such tide", function() thole.windows.by(NET, function() error("no such tide") end) end)
    raises("later", function()
        thole.windows.by(NET, function()
            coroutine.yield(0, 5)
            error("later")
        end)
    end)
    local token = {}
    local _, why = pcall(thole.windows.by, NET, function() error(token) end)
    t.truth(rawequal(why, token), "that the error is the function's own")
end)

test("mistakes in rules are named", function()
    raises("thole.windows.by has no windows: give at least one",
        function() thole.windows.by(NET, function() end) end)
    raises("thole.windows.by takes a function, not a table", function() thole.windows.by(NET, {}) end)
    raises("window 1 of thole.windows.by has no start", function()
        thole.windows.by(NET, function() coroutine.yield() end)
    end)
    raises("window 1 of thole.windows.by has no finish",
        function() thole.windows.by(NET, function() return 1 end) end)
    raises("start of window 1 of thole.windows.by: a time is a text or a number, not a boolean", function()
        thole.windows.by(NET, function() return true, 1 end)
    end)
    raises("label of window 1 of thole.windows.by is a table: give a text", function()
        thole.windows.by(NET, function() return 0, 1, {} end)
    end)
    raises("the function of thole.windows.by yielded windows and then returned one: yield that too",
        function()
        thole.windows.by(NET, function() coroutine.yield(0, 1) return 1, 2 end)
    end)
end)

test("mistakes in sliding are named", function()
    local function refuse(text, opts, net)
        raises(text, function() thole.windows.sliding(net or NET, opts) end)
    end
    refuse('option "length" of thole.windows.sliding is missing: give a duration, as in { length = "20 min" }', nil)
    refuse('unknown option "lenght" of thole.windows.sliding: did you mean "length"?', { lenght = 1 })
    refuse('option "length" of thole.windows.sliding is 0: windows last some time', { length = 0 })
    refuse('option "step" of thole.windows.sliding is 0: windows go on in time', { length = 1, step = 0 })
    refuse("thole.windows.sliding takes a step or an overlap, not both",
        { length = 1, step = 1, overlap = 0.5 })
    refuse('option "overlap" of thole.windows.sliding is a share from 0 to below 1, not 1',
        { length = 1, overlap = 1 })
    refuse('option "overlap" of thole.windows.sliding is a share from 0 to below 1, not nan',
        { length = 1, overlap = -(0 / 0) })
    refuse('option "overlap" of thole.windows.sliding leaves no step between windows: lower it',
        { length = 2e-9, overlap = 0.9 })
    refuse('option "start" of thole.windows.sliding: "x" is not a time: the network\'s times are plain numbers, write for example 12.5',
        { length = 1, start = "x" })
    refuse("thole.windows.sliding takes a network, not a table", { length = 1 }, {})
    local empty <close> = thole.network {}
    refuse("thole.windows.sliding finds no links to take the span from: give start and finish",
        { length = 1 }, empty)
    same(sliding({ length = 1, start = 0, finish = 2 }, empty), "0-1 1-2")
end)

test("mistakes in lists are named", function()
    local function refuse(text, list)
        raises(text, function() thole.windows.list(NET, list) end)
    end
    refuse("thole.windows.list has no windows: give at least one", {})
    refuse("thole.windows.list takes a list of windows or the path of a file, not a nil", nil)
    refuse("window 2 of thole.windows.list is a number: give { start, finish, label }", { { 0, 1 }, 5 })
    refuse("window 1 of thole.windows.list has no start", { {} })
    refuse("window 1 of thole.windows.list has no finish", { { 1 } })
    refuse('window 1 of thole.windows.list has "finsh": did you mean "finish"?', { { start = 1, finsh = 2 } })
    refuse("window 1 of thole.windows.list has names and places: give { start, finish, label } or { start =, finish =, label = }",
        { { 1, finish = 2 } })
    refuse("label of window 1 of thole.windows.list has a NUL byte in it", { { 1, 2, "a\0b" } })
end)

test("a window that is not there is nil, a misspelt name is an error", function()
    local w = thole.windows.sliding(NET, { length = 50 })
    same({ w[0], w[3], w[1].start, tostring(w) }, { nil, nil, 0, "2 windows" })
    local n = 0
    for i, window in ipairs(w) do n = n + i * (window.index == i and 1 or 0) end
    same(n, 3)
    raises('a list of windows has no field "eech": did you mean "each"?', function() local _ = w.eech end)
end)

local function file(text) return thole.windows.list(NET, t.write("windows.csv", text)) end

test("windows from a file", function()
    same(shown(file "start,finish\n0,10\n10,20.5\n"), "0-10 10-20.5")
    same(shown(file "start,finish,label\n0,10,first\n10,20,\n"), "0-10:first 10-20")
    same(shown(file "\239\187\191label;finish;start\r\n\"a;\"\"b\"\"\";10;0\r\n\r\n'c';20;10"),
        "0-10:a;\"b\" 10-20:'c'")
    same(shown(file "# made by hand\n\nstart\tfinish\tnote\n0\t10\tx\n"), "0-10")
end)

test("faults in a file of windows are placed", function()
    local path = t.folder() .. "windows.csv"
    local function refuse(words, text)
        t.write("windows.csv", text)
        raises(path .. words, function() thole.windows.list(NET, path) end)
    end
    refuse(": this file is empty: give a header start,finish and a window a line", "")
    refuse(": this file has a header but no windows", "start,finish\n")
    refuse(':1: there is no column "start": name the columns start, finish and perhaps label in the first line', "0,10\n")
    refuse(":3:2: \"noon\" is not a time: the network's times are plain numbers, write for example 12.5",
        "start,finish\n0,1\n1,noon\n")
    refuse(":4:1: \"x\" is not a time: the network's times are plain numbers, write for example 12.5",
        "# one\nstart,finish\n0,1\nx,2\n")
    refuse(":2: 1 fields where the header has 2", "start,finish\n0\n")
    refuse(":2: a quote is opened but not closed: close it", 'start,finish\n"0,1\n')
    refuse(':2: "x" follows a closing quote: double quotes inside of quoted text', 'start,finish\n"0"x,1\n')
    refuse(":3: this line is not UTF-8: save the file as UTF-8", "start,finish,label\n0,1,a\n1,2,\255\n")
    raises(('cannot read "%snone.csv": no such file or directory'):format(t.folder()), function()
        thole.windows.list(NET, t.folder() .. "none.csv")
    end)
end)
