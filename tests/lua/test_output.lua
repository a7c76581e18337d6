-- Files appear whole or not at all.

local thole = require "thole"
local native = require "thole.native"
local t = require "harness"
local test, same, raises = t.test, t.same, t.raises

-- A file of its own for each test, alone in the folder.
local function path(name)
    for _, other in ipairs(t.listing()) do os.remove(t.folder() .. other) end
    return t.folder() .. name
end

test("text is there after commit, and not before", function()
    local name = path "a.txt"
    local out = native.create(name)
    same(out:write("one ", 2, "\n", 2.5), out)
    local before = t.listing()
    same(#before, 1)
    t.truth(before[1]:find("^%.a%.txt%.part%-%x%x%x%x$"), "the name of the partial file: " .. before[1])
    out:commit()
    same(t.listing(), { "a.txt" })
    same(t.read(name), "one 2\n2.5")
    raises("this output is closed: out:write comes too late", function() out:write("more") end)
    raises("this output is closed: out:commit comes too late", function() out:commit() end)
    out:close()
    out:close()
    same(t.read(name), "one 2\n2.5")
end)

test("close without commit leaves the old file", function()
    local name = path "a.txt"
    t.write("a.txt", "old")
    local out = native.create(name)
    out:write("new")
    out:close()
    same({ t.listing(), t.read(name) }, { { "a.txt" }, "old" })
end)

test("an error leaves the old file and no partial one", function()
    local name = path "a.csv"
    t.write("a.csv", "old")
    raises("half way", function()
        thole.write(name, "thing", { format = function(_, out)
            out:write(("x"):rep(200000))
            error("half way")
        end })
    end)
    same({ t.listing(), t.read(name) }, { { "a.csv" }, "old" })
end)

test("an output that is forgotten is thrown away", function()
    local name = path "a.txt"
    native.create(name):write("x")
    collectgarbage()
    collectgarbage()
    same(t.listing(), {})
end)

test("two writers of one name do not meet; the last commit stays", function()
    local name = path "a.txt"
    local one, two = native.create(name), native.create(name)
    same(#t.listing(), 2)
    one:write("one")
    two:write("two")
    two:commit()
    one:commit()
    same({ t.listing(), t.read(name) }, { { "a.txt" }, "one" })
end)

test("large texts and many small ones arrive in order", function()
    local name = path "a.txt"
    local parts, random = {}, t.random(9)
    local out = native.create(name)
    for i = 1, 400 do
        parts[i] = ("%d,"):format(i) .. ("y"):rep(random(i % 50 == 0 and 150000 or 300))
        out:write(parts[i])
    end
    out:commit()
    t.truth(t.read(name) == table.concat(parts), "that the file is what was written")
end)

test("the mode of an old file stays, a new one gets the usual", function()
    local name = path "a.txt"
    t.write("a.txt", "old")
    assert(os.execute("chmod 640 '" .. name .. "'"))
    local out = native.create(name)
    out:commit()
    local pipe = io.popen("stat -c %a '" .. name .. "'; umask")
    same(pipe:read("l"), "640")
    local mask = tonumber(pipe:read("l"), 8)
    pipe:close()
    native.create(t.folder() .. "b.txt"):commit()
    pipe = io.popen("stat -c %a '" .. t.folder() .. "b.txt'")
    same(tonumber(pipe:read("l"), 8), 438 & ~mask) -- 666 in octal
    pipe:close()
end)

test("a link is followed, a device is written to", function()
    local name = path "a.txt"
    t.write("real.txt", "old")
    assert(os.execute("ln -s real.txt '" .. name .. "'"))
    local out = native.create(name)
    out:write("new")
    out:commit()
    same(t.read(t.folder() .. "real.txt"), "new")
    same(os.execute("test -L '" .. name .. "'"), true)
    out = native.create("/dev/null")
    out:write("nothing")
    out:commit()
    same(os.execute("test -c /dev/null"), true)
end)

test("a disk that is full is an error", function()
    local out = native.create("/dev/full")
    raises('cannot write "/dev/full": no space left on device', function() out:write(("x"):rep(100000)) end)
    raises("this output is closed: out:commit comes too late", function() out:commit() end)
    local small = native.create("/dev/full")
    small:write("x")
    raises('cannot write "/dev/full": no space left on device', function() small:commit() end)
end)

test("what cannot be written is refused", function()
    local name = path "a.txt"
    raises(('cannot write "%snone/a.txt": no such file or directory'):format(t.folder()), function()
        native.create(t.folder() .. "none/a.txt")
    end)
    raises(('cannot write "%s": is a directory'):format(t.folder() .. "."),
        function() native.create(t.folder() .. ".") end)
    raises("the path for thole.write has a NUL byte in it", function() native.create(name .. "\0") end)
    raises("the path for thole.write is empty: name a file", function() native.create("") end)
    local out = native.create(name)
    raises("out:write takes texts and numbers, not a table", function() out:write({}) end)
    raises("out:write takes an output, not a string: call it as out:write(…), with a colon",
        function() out.write("x") end)
    out:close()
    same(t.listing(), {})
end)

test("a long name has room for its partial file", function()
    local name = path(("n"):rep(250) .. ".csv")
    local out = native.create(name)
    out:write("x")
    out:commit()
    same(t.listing(), { ("n"):rep(250) .. ".csv" })
end)
