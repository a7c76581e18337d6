-- The recipes, run by the command: known barcodes, the fixed columns and their order, Betti numbers of the
-- demo week recomputed from its text, and the same bytes from any number of threads and from stock Lua.
--
--     lua5.4 tests/writers/test_recipes.lua [BUILD]

package.path = "tests/writers/?.lua;" .. package.path
local check = require "check"
local build = arg[1] or "build"

local folder = os.tmpname()
os.remove(folder)
assert(os.execute("mkdir -p " .. folder .. "/deep"))

local function spill(name, text)
    local file = assert(io.open(folder .. "/" .. name, "wb"))
    file:write(text)
    file:close()
    return folder .. "/" .. name
end

local function slurp(path)
    local file = io.open(path, "rb")
    if not file then return nil end
    local text = file:read("a")
    file:close()
    return text
end

-- Run a recipe; returns its exit code and what it said on both streams.
local function run(words, program)
    local said = folder .. "/said"
    local _, _, code = os.execute(("%s %s >%s 2>&1"):format(program or build .. "/thole run --quiet", words,
        said))
    return code, slurp(said)
end

local bars = folder .. "/bars.csv"
local HEADER = "dim,first,last,kind,birth,death,opens,closes\n"

local function barcode(words, wanted, what)
    os.remove(bars)
    local code, said = run(("recipes/barcode.lua out=%s %s"):format(bars, words))
    check.equal(code, 0, what .. ": " .. tostring(said))
    check.equal(slurp(bars), HEADER .. wanted, what)
end

-- ---- known barcodes -----------------------------------------------------------------------------

-- A triangle in the first of two windows, a link elsewhere in the second.
local triangle = spill("triangle.csv", "from,to,start,finish\na,b,0,10\nb,c,0,10\nc,a,0,10\nd,e,10,20\n")
barcode("input=" .. triangle .. " length=10", [[
0,1,1.5,closed-closed,5,10,0,20
0,1.5,2,closed-closed,10,15,0,20
1,1,1.5,closed-closed,5,10,0,20
]], "a triangle, then a link")
barcode("input=" .. triangle .. " length=10 radius=1", [[
0,1,1.5,closed-closed,5,10,0,20
0,1.5,2,closed-closed,10,15,0,20
]], "the triangle filled in")
barcode("input=" .. triangle .. " length=10 join=intersection", [[
0,1,1,closed-closed,5,5,0,10
0,2,2,closed-closed,15,15,10,20
1,1,1,closed-closed,5,5,0,10
]], "joined by what both have")
barcode("input=" .. triangle .. " length=10 dims=1", "1,1,1.5,closed-closed,5,10,0,20\n", "dimension 1 alone")
barcode("input=" .. triangle .. " length=10 radius=0 dims=0", [[
0,1,1.5,closed-closed,5,10,0,20
0,1,1.5,closed-closed,5,10,0,20
0,1,1.5,closed-closed,5,10,0,20
0,1.5,2,closed-closed,10,15,0,20
0,1.5,2,closed-closed,10,15,0,20
]], "places only: one bar a place, one row a bar")

-- Two pieces are joined by a link in the middle window only: b0 is 2, 1, 1, 1, 2.
local bridge = spill("bridge.csv", "p;q;on;off\na;b;0;30\nc;d;0;30\nb;c;10;20\n")
barcode("input=" .. bridge .. " from=p to=q start=on finish=off length=10 dims=0", [[
0,1,1,closed-open,5,5,0,10
0,1,3,closed-closed,5,25,0,30
0,3,3,open-closed,25,25,20,30
]], "two pieces, joined for a while")

-- Windows from a file, uneven and with a gap; decimals stay exact.
local windows = spill("windows.csv", "start,finish,label\n0,0.1,early\n0.3,2,late\n")
local steady = spill("steady.csv", "from,to,start,finish\na,b,0,9.7\n")
barcode("input=" .. steady .. " windows=" .. windows .. " dims=0", "0,1,2,closed-closed,0.05,1.15,0,2\n",
    "given windows")

-- Without a column finish, links are contacts; a compressed log reads the same; an output in another folder.
local contacts = spill("contacts.csv", "from,to,start\na,b,3\nb,c,4\n")
barcode("input=" .. contacts .. " length=2 overlap=0 dims=0", "0,1,1,closed-closed,4,4,3,5\n", "contacts")
assert(os.execute("gzip -k " .. triangle))
barcode("input=" .. triangle .. ".gz length=10 dims=1", "1,1,1.5,closed-closed,5,10,0,20\n", "gzip")
check.equal((run("recipes/barcode.lua input=" .. triangle .. " length=10 out=" .. folder .. "/deep/b.csv")),
    0)
check.truthy(slurp(folder .. "/deep/b.csv"), "an output in another folder")

-- Calendar times with a zone.
local calendar = spill("calendar.csv", "from,to,start,finish\na,b,2031-03-03T06:00,2031-03-03T07:00\n")
barcode("input=" .. calendar .. " length='1 h' zone=Atlantic/Azores dims=0", "0,1,1,closed-closed," ..
    "2031-03-03T06:30:00-01:00,2031-03-03T06:30:00-01:00,2031-03-03T06:00:00-01:00,2031-03-03T07:00:00-01:00\n", "a zone")

-- ---- refusals -----------------------------------------------------------------------------------

local function refused(words, piece)
    os.remove(bars)
    local code, said = run(("recipes/barcode.lua out=%s %s"):format(bars, words))
    check.truthy(code ~= 0, words .. " was taken")
    check.truthy(said:find(piece, 1, true), ("%s: %s"):format(words, said))
    check.equal(slurp(bars), nil, "a file in spite of a failure")
end
refused("input=" .. triangle, "give windows=FILE, or length=")
refused("input=" .. triangle .. " length=10 windows=" .. windows, "both windows and length")
refused("input=" .. triangle .. " length=10 radius=wide", 'radius "wide"')
refused("input=" .. triangle .. " length=10 radius=-1", 'radius "-1"')
refused("input=" .. triangle .. " length=10 lenght=10", 'did you mean "length"?')
refused("input=" .. folder .. "/none.csv length=10", "none.csv")
local faulty = spill("faulty.csv", "from,to,start,finish\na,b,0,10\na,b,20,10\n")
refused("input=" .. faulty .. " length=10", "faulty.csv:3")
barcode("input=" .. faulty .. " length=10 faulty=skip dims=0", "0,1,1,closed-closed,5,5,0,10\n",
    "a faulty row skipped")

-- ---- a failure half way -------------------------------------------------------------------------

spill("deep/old.txt", "the old one\n")
spill("half.lua", [[
local thole = require "thole"
thole.write("old.txt", "", { format = function(_, out)
    out:write(("x"):rep(1000000))
    error("of the recipe's own")
end })
]])
local ended, words = run("--out " .. folder .. "/deep " .. folder .. "/half.lua")
check.equal(ended, 1, "a failing format")
check.truthy(words:find("half.lua:4: of the recipe's own", 1, true), words)
check.equal(slurp(folder .. "/deep/old.txt"), "the old one\n", "the old file is whole")
os.execute("ls -A " .. folder .. "/deep >" .. folder .. "/list")
check.equal(slurp(folder .. "/list"), "b.csv\nold.txt\n", "nothing is left beside it")

-- ---- the demo week ------------------------------------------------------------------------------

-- Seconds since Monday 00:00 local, from the text; every row of the week has the same offset.
local function seconds(text)
    local day, hour, minute = text:match("^2031%-03%-(%d%d)T(%d%d):(%d%d):00%-01:00$")
    return ((day - 3) * 24 + hour) * 3600 + minute * 60
end
local links = {}
for line in io.lines("recipes/data/archipelago-week.csv") do
    local from, to, departs, arrives = line:match("^([^,]+),([^,]+),(2031[^,]+),(2031[^,]+),")
    if from and from ~= to then links[#links + 1] = { from, to, seconds(departs), seconds(arrives) } end
end

-- Pieces by union and find, loops as links - places + pieces.
local function numbers(low, high)
    local parent, places, pieces, known, pairs_seen = {}, 0, 0, {}, 0
    local function root(x)
        while parent[x] ~= x do x = parent[x] end
        return x
    end
    for _, link in ipairs(links) do
        if link[3] < high and link[4] > low then
            for k = 1, 2 do
                if not parent[link[k]] then
                    parent[link[k]] = link[k]
                    places, pieces = places + 1, pieces + 1
                end
            end
            local key = link[1] < link[2] and link[1] .. "\0" .. link[2] or link[2] .. "\0" .. link[1]
            if not known[key] then
                known[key] = true
                pairs_seen = pairs_seen + 1
                local a, b = root(link[1]), root(link[2])
                if a ~= b then
                    parent[a] = b
                    pieces = pieces - 1
                end
            end
        end
    end
    return pieces, pairs_seen - places + pieces
end

local WEEK = "recipes/barcode.lua input=recipes/data/archipelago-week.csv start=departs finish=arrives "
    .. "zone=Atlantic/Azores length='1 h' overlap=0.5 "
local code, said = run(WEEK .. "radius=graph out=" .. bars)
check.equal(code, 0, said)
local first_start, alive, previous = math.huge, { [0] = {}, {} }, nil
for _, link in ipairs(links) do first_start = math.min(first_start, link[3]) end
local last_window, KEYS = 0, {}
for line in (slurp(bars) or ""):gmatch("[^\n]+") do
    local dim, first, last, kind, birth, death, opens, closes =
        line:match("^(%d),([%d.]+),([%d.]+),([%a-]+),([^,]+),([^,]+),([^,]+),([^,]+)$")
    if dim then
        dim, first, last = math.tointeger(tonumber(dim)), tonumber(first), tonumber(last)
        check.truthy(first <= last and opens < closes and birth <= death and opens < birth and death < closes,
            line)
        check.equal(seconds(opens), first_start + (math.floor(first) - 1) * 1800, "opens of " .. line)
        check.equal(seconds(closes), first_start + (math.ceil(last) - 1) * 1800 + 3600, "closes of " .. line)
        check.equal(seconds(birth), first_start + (first - 1) * 1800 + 1800, "birth of " .. line)
        local key = { dim, first, last, kind }
        for k = 1, 4 do
            if previous and previous[k] ~= key[k] then
                check.truthy(previous[k] < key[k], "out of order: " .. line)
                break
            end
        end
        previous = key
        KEYS[kind] = true
        for i = math.ceil(first), math.floor(last) do alive[dim][i] = (alive[dim][i] or 0) + 1 end
        last_window = math.max(last_window, math.floor(last))
    end
end
for kind in pairs(KEYS) do
    check.truthy(kind:find("^%l+%-%l+$") and kind:gsub("open", ""):gsub("closed", "") == "-", "kind " .. kind)
end
check.truthy(last_window > 300, "too few windows: " .. last_window)
for i = 1, last_window do
    local pieces, loops = numbers(first_start + (i - 1) * 1800, first_start + (i - 1) * 1800 + 3600)
    check.equal(alive[0][i] or 0, pieces, "pieces in window " .. i)
    check.equal(alive[1][i] or 0, loops, "loops in window " .. i)
end

-- ---- the same bytes -----------------------------------------------------------------------------

for _, radius in ipairs { "graph", "1", "2" } do
    local texts = {}
    for i, program in ipairs { build .. "/thole run --quiet --threads 1", build
        .. "/thole run --quiet --threads 2",
        ("LUA_CPATH='%s/?.so' lua5.4"):format(build) } do
        os.remove(bars)
        local ended, words = run(WEEK .. "out=" .. bars .. " radius=" .. radius, program)
        check.equal(ended, 0, words)
        texts[i] = slurp(bars)
    end
    check.truthy(texts[1] and texts[1] == texts[2], "1 and 2 threads differ at radius " .. radius)
    check.truthy(texts[1] and texts[1] == texts[3], "the command and stock Lua differ at radius " .. radius)
end

local pages = {}
for i, program in ipairs { build .. "/thole run --quiet --threads 1", build
    .. "/thole run --quiet --threads 2",
    ("LUA_CPATH='%s/?.so' lua5.4"):format(build) } do
    local ended, words = run("recipes/week-report.lua out=" .. folder .. "/page.html", program)
    check.equal(ended, 0, words)
    pages[i] = slurp(folder .. "/page.html")
end
check.truthy(pages[1] and pages[1] == pages[2], "reports of 1 and 2 threads differ")
check.truthy(pages[1] and pages[1] == pages[3], "reports of the command and stock Lua differ")

os.execute("rm -r " .. folder)
check.finish()
