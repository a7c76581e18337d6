-- The guide's examples run, and print what the guide says that they print. The blocks of a section are one
-- recipe.
--
--     lua5.4 tests/writers/test_guide.lua [BUILD [bless]]
--
-- With bless, the outputs in the guide are replaced by what the recipes print.

package.path = "tests/writers/?.lua;" .. package.path
local check = require "check"
local build, bless = arg[1] or "build", arg[2] == "bless"
local GUIDE = "docs/guide.md"

local function slurp(path)
    local file = assert(io.open(path, "rb"))
    local text = file:read("a")
    file:close()
    return text
end

local folder = os.tmpname()
os.remove(folder)
assert(os.execute("mkdir " .. folder))

-- Where one block's output ends and the next one's begins.
local MARK = "--8<--"

local function run(code)
    local path = folder .. "/section.lua"
    local file = assert(io.open(path, "wb"))
    file:write(code)
    file:close()
    -- Examples name files from the top of the repository, so the recipe is given the right to read there.
    local _, _, ended = os.execute(("%s/thole run --quiet --trust --out %s %s >%s/out 2>&1"):format(build,
        folder, path,
        folder))
    return ended, slurp(folder .. "/out")
end

local text = slurp(GUIDE)
local replaced, sections, outputs = {}, 0, 0
local starts = {}
for at in text:gmatch("\n()## ") do starts[#starts + 1] = at end
for i, at in ipairs(starts) do
    local title, body = text:sub(at, (starts[i + 1] or 0) - 1):match("^([^\n]+)(.*)$")
    local code = {}
    for kind, block in body:gmatch("```(%l+)\n(.-)```") do
        if kind == "lua" then
            code[#code + 1] = block
        elseif kind == "text" then
            code[#code + 1] = ('print("%s")\n'):format(MARK)
        end
    end
    if #code > 0 then
        sections = sections + 1
        local ended, said = run(table.concat(code))
        check.equal(ended, 0, ("%s: %s"):format(title, said))
        local pieces = {}
        for piece in said:gmatch("(.-)" .. MARK:gsub("%-", "%%-") .. "\n") do pieces[#pieces + 1] = piece end
        for block in body:gmatch("```text\n(.-)```") do
            outputs = outputs + 1
            local got = table.remove(pieces, 1) or ""
            if bless then
                replaced[#replaced + 1] = { got }
            else
                check.equal(got, block, title)
            end
        end
    end
end

if bless then
    local i = 0
    local new = text:gsub("```text\n.-```", function()
        i = i + 1
        return "```text\n" .. replaced[i][1] .. "```"
    end)
    local file = assert(io.open(GUIDE, "wb"))
    file:write(new)
    file:close()
end
check.truthy(sections >= 8, "sections with examples: " .. sections)
check.truthy(outputs >= 8, "outputs: " .. outputs)
os.execute("rm -r " .. folder)
check.finish()
