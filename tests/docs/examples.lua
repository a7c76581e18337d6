-- The examples of README.md and of the documents do what they say, and the links between these files lead somewhere.
--
--     lua5.4 tests/docs/examples.lua [BUILD [bless]]
--
-- A block of code (sh, lua or c) that a text block follows must print exactly that. The blocks of one file run in one
-- scratch folder, in their order; build/ and recipes/ are there as in the repository. A lua block must at least be Lua, and a
-- block of sh without a text block is for the reader to type. The guide and the recipe reference have tests of their own
-- (tests/writers/test_guide.lua, tests/lua/test_describe.lua). With bless, the text blocks are replaced by what is printed.

local build, bless = arg[1] or "build", arg[2] == "bless"
local ELSEWHERE = { ["docs/guide.md"] = true, ["docs/recipe-reference.md"] = true }
local passed, failed = 0, 0

local function judge(fine, text, ...)
    if fine then
        passed = passed + 1
    else
        failed = failed + 1
        print("FAILED  " .. text:format(...))
    end
end

local function slurp(path)
    local file = assert(io.open(path, "rb"))
    local text = file:read("a")
    file:close()
    return text
end

local function spill(path, text)
    local file = assert(io.open(path, "wb"))
    assert(file:write(text))
    assert(file:close())
end

local function line_from(command)
    local pipe = assert(io.popen(command))
    local line = pipe:read("l")
    pipe:close()
    return assert(line, command .. " says nothing")
end

local function quoted(text) return "'" .. text:gsub("'", "'\\''") .. "'" end

-- Blocks of a document: { kind, text, line, first, last }, first and last being where the text stands.
local function blocks(text)
    local list, at = {}, 1
    while true do
        local _, open, kind = text:find("\n```(%l*)\n", at)
        if not open then return list end
        local close = text:find("\n```", open, true)
        assert(close, "a block is not closed")
        local _, line = text:sub(1, open):gsub("\n", "")
        list[#list + 1] = { kind = kind, text = text:sub(open + 1, close), line = line + 1, first = open + 1,
            last = close }
        at = close + 4
    end
end

local here = line_from("pwd")
local absolute = build:sub(1, 1) == "/" and build or here .. "/" .. build

-- How to run a block in `folder`, its text being in the file `name` there.
local run = {}
function run.sh(name) return "sh -eu " .. name end
function run.lua(name) return "build/thole run --quiet " .. name end
function run.c(name)
    return ("cc -std=c11 -Wall -Wextra -Werror -I%s %s %s/libthole.a $(pkg-config --libs libarchive zlib) -lpthread -lm -o %s.bin && ./%s.bin")
        :format(quoted(here .. "/core"), name, quoted(absolute), name, name)
end

local function check_blocks(path)
    local text = slurp(path)
    local folder = line_from("mktemp -d")
    assert(os.execute(("ln -s %s %s/build && ln -s %s %s/recipes"):format(quoted(absolute), folder,
        quoted(here .. "/recipes"), folder)))
    local list, replaced = blocks(text), {}
    for i, block in ipairs(list) do
        local wanted = list[i + 1] and list[i + 1].kind == "text" and list[i + 1]
        if block.kind == "lua" then
            judge(load(block.text, "=" .. path, "t"), "%s:%d: the example is not Lua", path, block.line)
        end
        if wanted and run[block.kind] then
            local name = ("block%d.%s"):format(i, block.kind)
            spill(folder .. "/" .. name, block.text)
            local fine = os.execute(("cd %s && { %s; } >out 2>err </dev/null"):format(folder, run[block.kind](name)))
            local said = slurp(folder .. "/out")
            replaced[#replaced + 1] = { wanted, said }
            judge(fine, "%s:%d: the example failed: %s", path, block.line, slurp(folder .. "/err"))
            judge(bless or said == wanted.text, "%s:%d: the example prints\n%s", path, block.line, said)
        elseif wanted then
            judge(block.kind ~= "", "%s:%d: a block without a kind stands before an output", path, block.line)
        end
    end
    if bless then
        for i = #replaced, 1, -1 do
            local block, said = replaced[i][1], replaced[i][2]
            text = text:sub(1, block.first - 1) .. said .. text:sub(block.last + 1)
        end
        spill(path, text)
    end
    os.execute("rm -rf " .. folder)
end

-- Names of headings as links know them: small letters, blanks as hyphens, no other signs.
local function anchors(path)
    local set = {}
    for heading in ("\n" .. slurp(path)):gmatch("\n#+ ([^\n]+)") do
        set[heading:lower():gsub("[^%w%- ]", ""):gsub(" ", "-")] = true
    end
    return set
end

local function check_links(path)
    local folder = path:match("^(.*/)") or ""
    for target in slurp(path):gsub("```.-```", ""):gmatch("%]%(([^)%s]+)%)") do
        local file, anchor = target:match("^([^#]*)#?(.*)$")
        if not target:find("^%a+://") then
            local to = file == "" and path or folder .. file
            local there = io.open(to)
            judge(there, "%s: the link to %s leads nowhere", path, target)
            if there then there:close() end
            judge(not there or anchor == "" or anchors(to)[anchor], "%s: %s has no heading for #%s", path, to, anchor)
        end
    end
end

local documents = { "README.md", "DEVELOPERS.md" }
for path in io.popen("ls docs/*.md"):lines() do documents[#documents + 1] = path end
for _, path in ipairs(documents) do
    check_links(path)
    if not ELSEWHERE[path] then check_blocks(path) end
end

-- README shows the first recipe whole, in ten lines.
local readme, first = slurp("README.md"), slurp("recipes/first.lua")
judge(readme:find("```lua\n" .. first .. "```", 1, true), "README.md does not show recipes/first.lua as it is")
local _, lines = first:gsub("\n", "")
judge(lines == 10, "recipes/first.lua has %d lines, not ten", lines)

print(("%d passed, %d failed"):format(passed, failed))
os.exit(failed == 0 and passed > 20)
