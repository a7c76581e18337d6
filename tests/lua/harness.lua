-- A test is a function with a name; it fails by an error. Nothing here knows what is tested.

local harness = { tests = {} }

function harness.test(name, f)
    harness.tests[#harness.tests + 1] = { name = name, f = f }
end

-- A value as text, tables with their keys in order, integers and floats told apart.
local function show(value)
    if type(value) == "string" then return ("%q"):format(value) end
    if type(value) ~= "table" then
        return math.type(value) == "float" and ("%.17g (float)"):format(value) or tostring(value)
    end
    local keys, out = {}, {}
    for key in pairs(value) do keys[#keys + 1] = key end
    table.sort(keys, function(a, b)
        if type(a) == type(b) and (type(a) == "number" or type(a) == "string") then return a < b end
        return type(a) < type(b)
    end)
    for i, key in ipairs(keys) do out[i] = ("[%s] = %s"):format(show(key), show(value[key])) end
    return "{ " .. table.concat(out, ", ") .. " }"
end
harness.show = show

-- The same value, of the same type of number, all the way down.
function harness.same(got, wanted, what)
    local a, b = show(got), show(wanted)
    if a ~= b then
        error(("%s\n    is     %s\n    not    %s"):format(what or "a value", a, b), 2)
    end
end

function harness.truth(value, what)
    if not value then error((what or "a condition") .. " does not hold", 2) end
end

-- f, called with ..., must raise exactly `text`, with the file and a line of f in front. Do not
-- `return` the failing call in f: a tail call leaves no line.
function harness.raises(text, f, ...)
    local fine, got = pcall(f, ...)
    if fine then error(("no error, but wanted\n    %s"):format(text), 2) end
    if type(got) ~= "string" then error(("the error is a %s, not a text"):format(type(got)), 2) end
    local info = debug.getinfo(f, "S")
    local file, line, rest = got:match("^([^\n]-):(%d+): (.*)$")
    if rest ~= text then error(("the error\n    is     %s\n    not    %s"):format(got, text), 2) end
    if file ~= info.short_src then
        error(("the error is placed in %s, not in %s"):format(file, info.short_src), 2)
    end
    line = tonumber(line)
    if line < info.linedefined or line > info.lastlinedefined then
        error(("the error is placed in line %d, not in %d to %d"):format(line, info.linedefined,
            info.lastlinedefined), 2)
    end
end

-- A folder of this run's own, with "/" at its end, and what is in it.
local folder
function harness.folder()
    if not folder then
        local name = os.tmpname()
        os.remove(name)
        folder = name .. ".d/"
        assert(os.execute("mkdir '" .. folder .. "'"))
    end
    return folder
end

function harness.listing()
    local pipe = io.popen("ls -A '" .. harness.folder() .. "'")
    local names = {}
    for name in pipe:lines() do names[#names + 1] = name end
    pipe:close()
    return names
end

function harness.write(name, text)
    local path = harness.folder() .. name
    local file = assert(io.open(path, "wb"))
    file:write(text)
    file:close()
    return path
end

function harness.read(path)
    local file = assert(io.open(path, "rb"))
    local text = file:read("a")
    file:close()
    return text
end

-- Random whole numbers 0 .. n - 1 from a seed that is printed when a test fails.
function harness.random(seed)
    local state = seed
    return function(n)
        -- xorshift64* (Vigna, "An experimental exploration of Marsaglia's xorshift generators, scrambled",
        -- ACM Trans. Math. Softw. 42, 2016)
        state = state ~ (state >> 12)
        state = state ~ (state << 25)
        state = state ~ (state >> 27)
        return ((state * 2685821657736338717) >> 33) % n
    end
end

-- Run all; returns whether all passed.
function harness.run()
    local failed = 0
    for _, test in ipairs(harness.tests) do
        local fine, why = xpcall(test.f, debug.traceback)
        if not fine then
            failed = failed + 1
            io.stderr:write("FAILED ", test.name, "\n  ", tostring(why), "\n")
        end
    end
    if folder then os.execute("rm -r '" .. folder .. "'") end
    print(("%d tests, %d failed"):format(#harness.tests, failed))
    return failed == 0 and #harness.tests > 0
end

return harness
