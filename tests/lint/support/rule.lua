-- A rule of the house: it looks at files one by one and names their faults. Before that it is tried on examples of
-- its own: what it must find, so that it cannot fall silent, and what it must let pass.

local rule = {}

-- Files that the repository holds below `folders` and whose names end by a pattern; without git, all there are.
function rule.files(folders, ending)
    local list = {}
    local command = "git -c safe.directory='*' ls-files -- %s 2>/dev/null || find %s -type f -not -path '*/.git/*' | sort"
    for path in io.popen(command:format(folders, folders)):lines() do
        path = path:gsub("^%./", "")
        local file = path:find(ending) and io.open(path) -- one that was removed but not yet committed is not there
        if file then
            file:close()
            list[#list + 1] = path
        end
    end
    return list
end

-- Lines of a text with their numbers.
function rule.lines(text)
    local number, at = 0, 1
    return function()
        if at > #text then return nil end
        local stop = text:find("\n", at, true) or #text + 1
        local line = text:sub(at, stop - 1)
        at, number = stop + 1, number + 1
        return number, line
    end
end

local function look(check, path, text)
    local found = {}
    check(path, text, function(line, ...)
        found[#found + 1] = ("%s:%d: %s"):format(path, line, (...):format(select(2, ...)))
    end)
    return found
end

-- what.check(path, text, fault): fault(line, format, …) names a fault.
-- what.files: the files to look at, at least what.least of them.
-- what.wrong: { path, text, what the one fault must say } · what.right: { path, text }
-- what.reset: called before each example and before the files, where check remembers something.
-- what.finish(fault): called after the last file, for what shows only then.
function rule.run(what)
    local failed, reset = 0, what.reset or function() end
    local function tell(...)
        failed = failed + 1
        print((...):format(select(2, ...)))
    end
    assert(#what.wrong > 0 and #what.right > 0, "a rule has examples of both kinds")
    for i, example in ipairs(what.wrong) do
        reset()
        local found = look(what.check, example[1], example[2])
        if #found ~= 1 or not found[1]:find(example[3], 1, true) then
            tell("wrong example %d should be told \"%s\", and was told: %s", i, example[3], table.concat(found, "; "))
        end
    end
    for i, example in ipairs(what.right) do
        reset()
        local found = look(what.check, example[1], example[2])
        if #found > 0 then tell("right example %d should pass, and was told: %s", i, table.concat(found, "; ")) end
    end
    reset()
    for _, path in ipairs(what.files) do
        local file = assert(io.open(path, "rb"))
        for _, text in ipairs(look(what.check, path, file:read("a"))) do tell("%s", text) end
        file:close()
    end
    if #what.files < what.least then tell("only %d files were found to look at", #what.files) end
    if what.finish then what.finish(tell) end
    print(("%d examples and %d files looked at, %d faults"):format(#what.wrong + #what.right, #what.files, failed))
    os.exit(failed == 0)
end

return rule
