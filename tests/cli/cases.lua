--- Tests of the command line: each tests/cli/*.case is a story in an empty folder.
--
--   lua5.4 tests/cli/cases.lua BUILD [FILE.case …]
--
-- A case file is made of these, in any number and order; lines that belong to one are indented by two blanks:
--   # …            a remark
--   file NAME      make a file of the lines that follow
--   run COMMAND    run it by the shell, then compare what follows:
--   out, err       the lines expected on standard output and standard error (none when left out)
--   exit N         the expected exit code (0 when left out)
--   holds NAME     the lines that a file must have now
--   absent NAME    a file must not be there
-- In expected lines "*" stands for any text, "\*" for a star, and a line "..." for any number of lines.

local folder = arg[0]:match("^(.*)/[^/]*$") or "."
package.path = folder .. "/?.lua;" .. package.path
local shell = require "shell"

local TAKES_LINES = { file = true, out = true, err = true, holds = true }

-- Steps of a case: { what, value, line, lines = {…} }.
local function parse(text, name)
    local steps, number = {}, 0
    for line in (text .. "\n"):gmatch("(.-)\n") do
        number = number + 1
        local last = steps[#steps]
        if line:sub(1, 2) == "  " then
            assert(last and TAKES_LINES[last.what], ("%s:%d: these lines belong to nothing"):format(name, number))
            -- Blank lines are part of the text only when indented lines follow.
            for _ = 1, last.blank or 0 do
                last.lines[#last.lines + 1] = ""
            end
            last.blank = 0
            last.lines[#last.lines + 1] = line:sub(3)
        elseif line == "" then
            if last and last.lines and #last.lines > 0 then
                last.blank = (last.blank or 0) + 1
            end
        elseif line:sub(1, 1) ~= "#" then
            local what, value = line:match("^(%l+) ?(.*)$")
            assert(what == "run" or what == "exit" or what == "absent" or TAKES_LINES[what],
                ("%s:%d: what is this?"):format(name, number))
            steps[#steps + 1] = { what = what, value = value, line = number, lines = {} }
        end
    end
    return steps
end

local function line_fits(expected, got)
    local pattern = expected:gsub("\\%*", "\0"):gsub("[%^%$%(%)%%%.%[%]%+%-%?]", "%%%0"):gsub("%*", ".*"):gsub("\0", "%%*")
    return got:find("^" .. pattern .. "$") ~= nil
end

-- Do the lines from number i on fit those expected from number j on?
local function lines_fit(expected, got, j, i)
    while j <= #expected do
        if expected[j] == "..." then
            for next_i = i, #got + 1 do
                if lines_fit(expected, got, j + 1, next_i) then
                    return true
                end
            end
            return false
        elseif got[i] == nil or not line_fits(expected[j], got[i]) then
            return false
        end
        i, j = i + 1, j + 1
    end
    return i > #got
end

local function lines_of(text)
    local lines = {}
    for line in (text:sub(-1) == "\n" and text or text .. (text ~= "" and "\n" or "")):gmatch("(.-)\n") do
        lines[#lines + 1] = line
    end
    return lines
end

local failures, checks = 0, 0

local function expect(name, step, what, expected, text)
    checks = checks + 1
    local got = lines_of(text or "")
    if text == nil or not lines_fit(expected, got, 1, 1) then
        failures = failures + 1
        print(("%s:%d: %s is not as expected"):format(name, step.line, what))
        print("  expected:\n    " .. table.concat(expected, "\n    "))
        print("  got:\n    " .. (text == nil and "(nothing there)" or table.concat(got, "\n    ")))
    end
end

-- The run at steps[i] with what is expected of it; returns the number of the next step.
local function run_step(name, steps, i, place, environment)
    local step = steps[i]
    local expected = { out = {}, err = {} }
    local code = 0
    i = i + 1
    while steps[i] and (expected[steps[i].what] or steps[i].what == "exit") do
        if steps[i].what == "exit" then
            code = assert(math.tointeger(tonumber(steps[i].value)), name .. ": not an exit code")
        else
            expected[steps[i].what] = steps[i].lines
        end
        i = i + 1
    end
    local out, err, got = shell.run(place, environment, step.value)
    expect(name, step, "standard output of " .. step.value, expected.out, out)
    expect(name, step, "standard error of " .. step.value, expected.err, err)
    expect(name, step, "exit code of " .. step.value, { tostring(code) }, tostring(got))
    return i
end

local function tell(path, environment)
    local name = path:match("[^/]*$")
    local steps = parse(assert(shell.read(path), "cannot read " .. path), name)
    local place = shell.folder()
    local i = 1
    while steps[i] do
        local step = steps[i]
        if step.what == "run" then
            i = run_step(name, steps, i, place, environment)
        else
            if step.what == "file" then
                if step.value:find("/") then
                    shell.make_folders(place .. "/" .. step.value:match("^(.*)/"))
                end
                shell.write(place .. "/" .. step.value, table.concat(step.lines, "\n") .. "\n")
            elseif step.what == "holds" then
                expect(name, step, step.value, step.lines, shell.read(place .. "/" .. step.value))
            elseif step.what == "absent" then
                expect(name, step, step.value .. " (absent)", { "nil" }, tostring(shell.read(place .. "/" .. step.value)))
            else
                error(("%s:%d: %s without a run before it"):format(name, step.line, step.what))
            end
            i = i + 1
        end
    end
    shell.remove(place)
end

local build = assert(arg[1], "which build folder? write lua5.4 tests/cli/cases.lua build")
local files = table.move(arg, 2, #arg, 1, {})
if #files == 0 then
    local pipe = io.popen("ls " .. shell.quote(folder) .. "/*.case")
    for file in pipe:lines() do
        files[#files + 1] = file
    end
    pipe:close()
end
assert(#files > 0, "no cases found")
local environment = shell.environment(build, arg[-1] or "lua5.4")
for _, file in ipairs(files) do
    tell(file, environment)
end
print(("%d cases, %d checks, %d failed"):format(#files, checks, failures))
os.exit(failures == 0 and checks > 0)
