-- What the tests of the Lua half share: checks that count, a stand-in for the core's output objects
-- that keeps what is written, and a tally at the end.

local check = { done = 0, failed = 0 }

local function show(value)
    if type(value) == "string" then return ("%q"):format(value) end
    return tostring(value)
end

local function report(ok, what, detail)
    check.done = check.done + 1
    if ok then return true end
    check.failed = check.failed + 1
    local where = debug.getinfo(3, "Sl")
    io.stderr:write(("%s:%d: %s%s\n"):format(where.short_src, where.currentline, what, detail or ""))
    return false
end

function check.equal(got, wanted, what)
    local ok = report(got == wanted, what or "not equal",
        (": got %s, wanted %s"):format(show(got), show(wanted)))
    return ok
end

function check.near(got, wanted, tolerance, what)
    local ok = report(math.abs(got - wanted) <= tolerance, what or "not near",
        (": got %s, wanted %s"):format(show(got), show(wanted)))
    return ok
end

function check.truthy(value, what)
    local ok = report(value, what or "not true")
    return ok
end

-- f must fail with a message that holds `piece`.
function check.fails(f, piece, what)
    local ok, why = pcall(f)
    local ok = report(not ok and tostring(why):find(piece, 1, true), what or "no such failure",
        (": got %s, wanted %s"):format(ok and "no error" or show(why), show(piece)))
    return ok
end

-- Files written through the stand-in, by path: only those that were committed.
check.files = {}

-- Let the Lua half be required from its sources, with `native` in place of the core.
function check.without_core()
    package.path = "lua/?.lua;lua/?/init.lua;" .. package.path
    package.preload["thole.native"] = function()
        return {
            version = "0.0.0",
            fail = function(text) error(text, 0) end,
            create = function(path)
                local pieces = {}
                return setmetatable({
                    write = function(self, ...)
                        for i = 1, select("#", ...) do pieces[#pieces + 1] = (select(i, ...)) end
                        return self
                    end,
                    commit = function() check.files[path] = table.concat(pieces) end,
                }, { __close = function() pieces = nil end })
            end,
        }
    end
end

-- Numbers for random cases, from a seed that is printed and can be set: SEED=7. n of them times the multiplier
-- CASES, which may be a fraction; at least one.
local seed = math.tointeger(tonumber(os.getenv("SEED") or 20310303))
local multiplier = tonumber(os.getenv("CASES") or 1)
function check.cases(n) return math.max(1, n * multiplier // 1) end
function check.random(...)
    if seed then
        math.randomseed(seed)
        print("seed " .. seed)
        seed = nil
    end
    return math.random(...)
end

function check.finish()
    print(("%d checks, %d failed"):format(check.done, check.failed))
    if check.failed > 0 or check.done == 0 then os.exit(1) end
end

return check
