--- The confined world of a recipe: what it sees, reads and writes.
--
-- A recipe gets tables of its own in place of the standard ones, so that nothing it changes reaches the
-- code around it, and functions that cannot do harm in place of those that can. This limits what a careless
-- or hostile recipe does. It is no guarantee: memory and time are not limited, and Lua or a library may have
-- faults.

local nearest = require "thole.nearest"

local confine = {}

-- Taken before the global tables lose them.
local io_open, io_lines, load_text = io.open, io.lines, load
local real_require, string_mt = require, getmetatable("")

-- Standard functions that are given as they are.
local PLAIN = { "assert", "error", "ipairs", "next", "pairs", "pcall", "print", "rawequal", "rawget",
    "rawlen", "rawset", "select", "tonumber", "tostring", "type", "warn", "xpcall", "_VERSION" }
local PLAIN_OS = { "clock", "date", "difftime", "time" }
local PLAIN_IO = { "read", "stderr", "stdin", "stdout", "type", "write" }
local COLLECT = { collect = true, count = true, step = true }

-- Parts of the command itself and the C functions below the Lua half, which are not for recipes.
local HIDDEN = {
    ["thole.command"] = true, ["thole.confine"] = true, ["thole.host"] = true, ["thole.native"] = true,
}
local LIBRARIES = { "coroutine", "io", "math", "os", "string", "table", "utf8" }
local CLOSED = { debug = true, package = true, ffi = true }

local function copy(from, names)
    local to = {}
    if names then
        for _, name in ipairs(names) do
            to[name] = from[name]
        end
    else
        for name, value in pairs(from) do
            to[name] = value
        end
    end
    return to
end

-- Is the resolved path `path` the folder `folder` or in it?
local function within(path, folder)
    return folder == "/" or path == folder or path:sub(1, #folder + 1) == folder .. "/"
end

-- Folder and last name of a path; no name when it ends in "/", "." or "..".
local function split(path)
    local folder, name = path:match("^(.*)/([^/]*)$")
    if not folder then
        folder, name = ".", path
    elseif folder == "" then
        folder = "/"
    end
    if name == "" or name == "." or name == ".." then
        name = nil
    end
    return folder, name
end
confine.split = split

---------------------------------------------------------------------------------------------------
-- Paths.

--- What may be read and written.
-- host: functions of the command; own: resolved folder of the recipe; out: resolved folder for outputs;
-- given: values by name from the command line; free: true lifts all refusals.
-- Returns gate(path, "read"|"write"): the path to use, or nil and what is wrong.
function confine.gate(host, own, out, given, free)
    local folders, files = { own }, {}

    -- Where a path that is to be written leads: its resolved folder and its name in there.
    local function resolve_target(path)
        if path:sub(1, 1) ~= "/" then
            path = out .. "/" .. path
        end
        local folder, name = split(path)
        if not name then
            return nil, "it is not the name of a file"
        end
        local resolved, why = host.real(folder)
        if not resolved then
            return nil, ('folder "%s": %s'):format(folder, why:lower())
        end
        return (resolved == "/" and "" or resolved) .. "/" .. name, nil, resolved
    end

    local function let_read(value)
        local resolved = value ~= "" and not value:find("\0", 1, true) and host.real(value)
        if resolved and host.kind(resolved) == "folder" then
            folders[#folders + 1] = resolved
        elseif resolved then
            files[resolved] = true
        end
    end
    for _, value in pairs(given) do
        let_read(value)
        for item in value:gmatch("[^,]+") do -- a list of files
            let_read(item:match("^%s*(.-)%s*$"))
        end
    end
    local target = given.out and not given.out:find("\0", 1, true) and resolve_target(given.out)

    local function may_read(path)
        if path == "-" then
            return path -- standard input
        end
        local resolved, why = host.real(path)
        if not resolved then
            for _, value in pairs(given) do
                if value == path then
                    return nil, ('cannot read "%s": %s'):format(path, why:lower())
                end
            end
        elseif files[resolved] then
            return path
        else
            for _, folder in ipairs(folders) do
                if within(resolved, folder) then
                    return path
                end
            end
        end
        -- The same for what is not there: a recipe cannot find out what there is.
        return nil, ('"%s" is not for this recipe to read: give its path as name=value, or run with --trust')
            :format(path)
    end

    local function may_write(path)
        local resolved, why, folder = resolve_target(path)
        if not resolved then
            return nil, ('cannot write "%s": %s'):format(path, why)
        elseif resolved == target then
            return resolved -- named by the user, even when it is a link or a device
        elseif not within(folder, out) then
            return nil, ('"%s" is outside of the folder for outputs, "%s": name another with --out, '
                .. "or run with --trust"):format(path, out)
        elseif resolved:sub(out == "/" and 1 or #out + 1):find("/.", 1, true) then
            -- Hidden files steer shells, editors and version control.
            return nil, ('"%s" would be hidden: write to a name without a dot in front'):format(path)
        elseif host.kind(resolved, "link") == "link" then
            return nil, ('"%s" is a link: write to a file of its own'):format(path)
        end
        return resolved
    end

    return function(path, mode)
        if path:find("\0", 1, true) then
            return nil, "a path has no NUL bytes"
        elseif not free then
            return (mode == "write" and may_write or may_read)(path)
        elseif mode == "write" and path:sub(1, 1) ~= "/" then
            return out .. "/" .. path
        end
        return path
    end
end

---------------------------------------------------------------------------------------------------
-- Functions with a check before them.

local function confined_get_metatable(value)
    return type(value) == "table" and getmetatable(value) or nil
end

local function confined_set_metatable(value, metatable)
    if type(metatable) == "table" and rawget(metatable, "__gc") ~= nil then
        error("a recipe has no finalisers (__gc): use a variable with <close>", 2)
    end
    return setmetatable(value, metatable)
end

local function confined_collect(what, ...)
    what = what == nil and "collect" or what
    if not COLLECT[what] then
        error(('collectgarbage "%s" is not for recipes: known are collect, count, step')
            :format(tostring(what)), 2)
    end
    return collectgarbage(what, ...)
end

local function confined_io(gate)
    local lib = copy(io, PLAIN_IO)
    function lib.open(path, mode)
        if type(path) ~= "string" then
            error("the path of a file is a text, not a " .. type(path), 2)
        elseif mode ~= nil and mode ~= "r" and mode ~= "rb" then
            return nil, "recipes write through thole.write"
        end
        local ok, why = gate(path, "read")
        if not ok then
            return nil, why
        end
        return io_open(path, "r")
    end
    function lib.lines(path, ...)
        if path == nil then
            return io_lines(nil, ...)
        end
        local file, why = lib.open(path)
        if not file then
            error(why, 2)
        end
        file:close()
        return io_lines(path, ...)
    end
    function lib.close(file)
        if io.type(file) ~= "file" then
            error("io.close takes an open file", 2)
        end
        return file:close()
    end
    return lib
end

-- load, loadfile and dofile: text only, and seeing what the recipe sees unless told otherwise.
local function add_loaders(env, host, gate)
    function env.load(chunk, name, mode, ...)
        if type(chunk) == "function" then
            local pieces = {}
            while true do
                local piece = chunk()
                if piece == nil or piece == "" then
                    break
                elseif type(piece) ~= "string" then
                    error("reader function must return a string", 2)
                end
                pieces[#pieces + 1] = piece
            end
            chunk, name = table.concat(pieces), name == nil and "=(load)" or name
        elseif type(chunk) ~= "string" then
            error("load takes a text or a function, not a " .. type(chunk), 2)
        end
        if mode ~= nil and (type(mode) ~= "string" or not mode:find("t", 1, true)) then
            return nil, "recipes load text, not binary chunks"
        end
        local environment = env
        if select("#", ...) > 0 then
            environment = ...
        end
        return load_text(chunk, name, "t", environment)
    end
    function env.loadfile(path, mode, ...)
        if type(path) ~= "string" then
            return nil, "loadfile takes the path of a file"
        elseif mode ~= nil and (type(mode) ~= "string" or not mode:find("t", 1, true)) then
            return nil, "recipes load text, not binary chunks"
        end
        local ok, why = gate(path, "read")
        if not ok then
            return nil, why
        end
        local environment = env
        if select("#", ...) > 0 then
            environment = ...
        end
        local f, faulty = host.load(path, environment)
        return f, faulty
    end
    function env.dofile(path)
        local f, why = env.loadfile(path)
        if not f then
            error(why, 2)
        end
        return f()
    end
end

-- require: thole, the standard libraries as this recipe has them, and Lua files beside the recipe.
local function add_require(env, host, own, shown)
    local loaded = { _G = env }
    for _, name in ipairs(LIBRARIES) do
        loaded[name] = env[name]
    end
    local loading = {}

    local function find(name)
        for _, tail in ipairs { ".lua", "/init.lua" } do
            local path = shown .. name:gsub("%.", "/") .. tail
            local resolved = host.real(path)
            if resolved and within(resolved, own) and host.kind(resolved) == "file" then
                return path
            end
        end
    end

    function env.require(name)
        if type(name) ~= "string" then
            error("require takes the name of a module, not a " .. type(name), 2)
        elseif loaded[name] ~= nil then
            return loaded[name]
        elseif (name == "thole" or name:find("^thole%.")) and not HIDDEN[name] then
            local ok, module = pcall(real_require, name)
            if not ok then
                error(('no module "%s"'):format(name), 2)
            end
            loaded[name] = module
            return module
        elseif CLOSED[name] or HIDDEN[name] then
            error(('module "%s" is not for recipes: run with --trust if this recipe needs it')
                :format(name), 2)
        elseif loading[name] then
            error(('module "%s" is required while it is being loaded: let modules not need each other')
                :format(name), 2)
        end
        local path = name:find("^[%w_%-]+[%w_%-%.]*$") and not name:find("..", 1, true) and find(name)
        if not path then
            local known = nearest.name(name, { "thole", table.unpack(LIBRARIES) })
            error(('no module "%s" in the recipe\'s folder: %s'):format(name,
                known and ('did you mean "%s"?'):format(known)
                or "only thole and Lua files beside the recipe can be required"), 2)
        end
        local f, why = host.load(path, env)
        if not f then
            error(why, 0)
        end
        loading[name] = true
        local module = f(name, path)
        loading[name] = nil
        loaded[name] = module == nil and true or module
        return loaded[name], path
    end
end

---------------------------------------------------------------------------------------------------

-- What the code around recipes does not need is taken away from it too: a fault there then gives nothing
-- away.
local function strip_globals()
    for _, name in ipairs { "input", "lines", "open", "output", "popen", "tmpfile" } do
        io[name] = nil
    end
    for _, name in ipairs { "execute", "exit", "getenv", "remove", "rename", "setlocale", "tmpname" } do
        os[name] = nil
    end
    for _, name in ipairs { "debug", "dofile", "load", "loadfile" } do
        _G[name] = nil
    end
    package.loaded.debug = nil
    package.path, package.cpath, package.loadlib, package.searchpath = "", "", nil, nil
    for i = #package.searchers, 2, -1 do
        package.searchers[i] = nil -- the first one looks in package.preload
    end
    string.dump = nil
end

--- The environment of a confined recipe. shown: how the recipe's folder is written in front of file names
-- ("recipes/", or ""). Afterwards this state is good for nothing but confined recipes.
function confine.environment(host, gate, own, shown)
    strip_globals()
    local env = copy(_G, PLAIN)
    env._G = env
    for _, name in ipairs { "coroutine", "math", "string", "table", "utf8" } do
        env[name] = copy(_G[name])
    end
    env.os = copy(os, PLAIN_OS)
    env.io = confined_io(gate)
    env.collectgarbage = confined_collect
    env.getmetatable = confined_get_metatable
    env.setmetatable = confined_set_metatable
    add_loaders(env, host, gate)
    add_require(env, host, own, shown)
    -- Methods of texts come from a table that nobody else has.
    string_mt.__index = copy(string)
    string_mt.__metatable = false
    getmetatable(io.stdout).__metatable = false
    return env
end

return confine
