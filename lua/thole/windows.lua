-- thole.windows: rules that cut time into windows. Each ends in one of two native functions, which
-- check order and emptiness; here times are read, and messages say whose they are.

local native = require "thole.native"
local nearest = require "thole.nearest"
local table_file = require "thole.windows_file"

local create, resume, status = coroutine.create, coroutine.resume, coroutine.status
local fail = native.fail

local windows = {}

---------------------------------------------------------------------------------------------------
-- Arguments.

local function check_options(opts, known, of)
    if opts == nil then return {} end
    if type(opts) ~= "table" then
        fail(("options of %s are a table, as in { name = value }, not a %s"):format(of, type(opts)))
    end
    for key in pairs(opts) do
        if type(key) ~= "string" then
            fail(("options of %s have names, as in { name = value }, not %s keys"):format(of, type(key)))
        end
        local found = false
        for _, name in ipairs(known) do found = found or name == key end
        if not found then fail(('unknown option "%s" of %s: %s'):format(key, of,
            nearest.hint(key, known))) end
    end
    return opts
end

local function option_ticks(read, net, opts, name, of)
    if opts[name] == nil then return nil end
    local ticks, why = read(net, opts[name])
    if not ticks then fail(('option "%s" of %s: %s'):format(name, of, why)) end
    return ticks
end

---------------------------------------------------------------------------------------------------
-- sliding

local SLIDING = "thole.windows.sliding"
local TICKS = 1000000000 -- in a unit; also the whole that a share is a part of

-- length less its share: exact up to the tick that it is rounded to. The product is taken in two parts,
-- because the whole of it would not fit.
local function step_of_overlap(length, opts)
    local overlap = opts.overlap
    if overlap == nil then return length end
    if type(overlap) ~= "number" or not (overlap >= 0 and overlap < 1) then
        fail(('option "overlap" of %s is a share from 0 to below 1, not %s'):format(SLIDING,
            tostring(overlap)))
    end
    local share, why = native.number_ticks(overlap)
    if not share then fail(('option "overlap" of %s: %s'):format(SLIDING, why)) end
    local shared = length // TICKS * share + (length % TICKS * share + TICKS // 2) // TICKS
    if shared >= length then
        fail(('option "overlap" of %s leaves no step between windows: lower it'):format(SLIDING))
    end
    return length - shared
end

function windows.sliding(net, opts)
    local first, last = native.span_ticks(net, SLIDING)
    opts = check_options(opts, { "finish", "length", "overlap", "start", "step" }, SLIDING)
    local length = option_ticks(native.duration_ticks, net, opts, "length", SLIDING)
    local step = option_ticks(native.duration_ticks, net, opts, "step", SLIDING)
    if not length then fail(('option "length" of %s is missing: give a duration, as in { length = "20 min" }'):format(SLIDING)) end
    if length == 0 then fail(('option "length" of %s is 0: windows last some time'):format(SLIDING)) end
    if step == 0 then fail(('option "step" of %s is 0: windows go on in time'):format(SLIDING)) end
    if step and opts.overlap ~= nil then
        fail(("%s takes a step or an overlap, not both"):format(SLIDING))
    end
    local start = option_ticks(native.ticks, net, opts, "start", SLIDING) or first
    local finish = option_ticks(native.ticks, net, opts, "finish", SLIDING) or last
    if not start or not finish then
        fail(("%s finds no links to take the span from: give start and finish"):format(SLIDING))
    end
    -- A contact at the very end, or alone, is in no window that ends there: windows are half-open.
    if opts.finish == nil and finish >= start and native.contact_at(net, finish) then finish = finish + 1 end
    return native.sliding_windows(net, start, finish, length, step or step_of_overlap(length, opts))
end

---------------------------------------------------------------------------------------------------
-- list

-- Windows taken one by one: add(start, finish, label), then done().
local function collector(net, of)
    local starts, finishes, labels, n = {}, {}, {}, 0
    local function ticks(value, name)
        local found, why = native.ticks(net, value)
        if not found then fail(("%s of window %d of %s: %s"):format(name, n + 1, of, why)) end
        return found
    end
    local function add(start, finish, label)
        if finish == nil then fail(("window %d of %s has no finish"):format(n + 1, of)) end
        if label ~= nil and type(label) ~= "string" and type(label) ~= "number" then
            fail(("label of window %d of %s is a %s: give a text"):format(n + 1, of, type(label)))
        end
        local from, to = ticks(start, "start"), ticks(finish, "finish")
        label = label ~= nil and tostring(label) or ""
        if label:find("\0", 1, true) then fail(("label of window %d of %s has a NUL byte in it"):format(n + 1,
            of)) end
        n = n + 1
        starts[n], finishes[n], labels[n] = from, to, label
    end
    local function done()
        if n == 0 then fail(("%s has no windows: give at least one"):format(of)) end
        return native.list_windows(net, starts, finishes, labels, n)
    end
    return add, done
end

local LIST = "thole.windows.list"
local KEYS = { "finish", "label", "start" }

local function listed(window, i)
    if type(window) ~= "table" then
        fail(("window %d of %s is a %s: give { start, finish, label }"):format(i, LIST, type(window)))
    end
    for key in pairs(window) do
        if not (key == 1 or key == 2 or key == 3 or key == "start" or key == "finish" or key == "label") then
            fail(('window %d of %s has "%s": %s'):format(i, LIST, tostring(key),
                nearest.hint(tostring(key), KEYS)))
        end
    end
    local by_name = window.start ~= nil or window.finish ~= nil or window.label ~= nil
    if by_name and (window[1] ~= nil or window[2] ~= nil or window[3] ~= nil) then
        fail(("window %d of %s has names and places: give { start, finish, label } or { start =, finish =, label = }")
            :format(i, LIST))
    end
    local start = by_name and window.start or window[1]
    if start == nil then fail(("window %d of %s has no start"):format(i, LIST)) end
    if by_name then return start, window.finish, window.label end
    return start, window[2], window[3]
end

function windows.list(net, list)
    native.span_ticks(net, LIST) -- checks that it is a network
    if type(list) == "string" then return table_file.read(net, list) end
    if type(list) ~= "table" then
        fail(("%s takes a list of windows or the path of a file, not a %s"):format(LIST, type(list)))
    end
    local add, done = collector(net, LIST)
    for i = 1, #list do add(listed(list[i], i)) end
    return done()
end

---------------------------------------------------------------------------------------------------
-- by

local BY = "thole.windows.by"

-- The function runs as a coroutine. One that yields gives a window each time, until it ends; one that
-- returns a window is an iterator, and is called again until it returns nil.
function windows.by(net, rule)
    native.span_ticks(net, BY)
    if type(rule) ~= "function" then
        fail(("%s takes a function, not a %s"):format(BY, type(rule)))
    end
    local add, done = collector(net, BY)
    local i, last_start, last_finish = 1, nil, nil
    local co, yields = create(rule), false
    while true do
        local fine, start, finish, label = resume(co, i, last_start, last_finish)
        if not fine then error(start, 0) end -- its own error, whatever it is
        local ended = status(co) == "dead"
        if ended and yields and start ~= nil then
            fail(("the function of %s yielded windows and then returned one: yield that too"):format(BY))
        end
        if start == nil then
            if not ended then fail(("window %d of %s has no start"):format(i, BY)) end
            return done()
        end
        add(start, finish, label)
        yields = not ended
        if ended then co = create(rule) end
        i, last_start, last_finish = i + 1, start, finish
    end
end

return windows
