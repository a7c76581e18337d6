--- The `thole` command: words of the command line to a run, help, or a refusal.
--
-- A command is one entry of COMMANDS, a topic of help one of TOPICS, an option of `run` one of OPTIONS.

local confine = require "thole.confine"
local nearest = require "thole.nearest"
local param_help = require "thole.param_help"

local DONE, FAILED, USAGE = 0, 1, 2

local OPTIONS = {
    { name = "out", value = "DIR",
        help = "folder that outputs are written in, made when it is not there (default: here)" },
    { name = "quiet", help = "no progress on the terminal" },
    { name = "threads", value = "N",
        help = "worker threads, 1 to 256; results do not depend on it (default: one a processor)" },
    { name = "trace", help = "show where an error came from, call by call" },
    { name = "trust", help = "let the recipe do all that Lua can do; see thole help confinement" },
}

local COMMANDS, TOPICS -- below

---------------------------------------------------------------------------------------------------
-- Messages.

-- One line, without characters that would steer a terminal.
local function one_line(text)
    text = text:gsub("%s*[\r\n]+%s*", " "):gsub("^%s+", ""):gsub("%s+$", "")
    return (text:gsub("[%c\127]", function(c) return ("\\x%02x"):format(c:byte()) end))
end

local function say(host, text, ...)
    if select("#", ...) > 0 then
        text = text:format(...)
    end
    host.say("thole: " .. one_line(text))
end

local function usage(host, text, ...)
    say(host, text, ...)
    return USAGE
end

-- The error with the recipe's line in front, once, and no lines of Thole's own Lua files.
local function cause(text, place)
    text = (" " .. text):gsub("(%s)thole/[%w_/]+%.lua:%d+: ", "%1"):sub(2)
    if place then
        local file = place:match("^(.*):%d+$")
        if text:sub(1, #file + 1) ~= file .. ":" then
            -- An error carried over from a file that the recipe required has a place of its own.
            if not text:find("^[^%s:]+%.lua:%d+: ") then
                text = place .. ": " .. text
            end
        end
    end
    return text
end

---------------------------------------------------------------------------------------------------
-- Words of `thole run`.

local function option_names()
    local names = {}
    for i, option in ipairs(OPTIONS) do
        names[i] = "--" .. option.name
    end
    return names
end

local function find_option(word)
    for _, option in ipairs(OPTIONS) do
        if word == "--" .. option.name then
            return option
        end
    end
end

-- recipe, list of name=value words, options by name; or nil and what is wrong.
local function parse_run(words)
    local recipe, rest, options = nil, {}, {}
    local i = 2
    local only_words = false
    while i <= #words do
        local word = words[i]
        if word == "--" and not only_words then
            only_words = true
        elseif word:sub(1, 1) == "-" and #word > 1 and not only_words then
            local name, value = word:match("^(%-%-[^=]+)=(.*)$")
            local option = find_option(name or word)
            if not option then
                local hint = nearest.hint(name or word, option_names())
                return nil, ('no option "%s": %s'):format(name or word, hint)
            elseif not option.value and value then
                return nil, ('option "%s" takes no value'):format(name)
            elseif option.value and not value then
                i = i + 1
                value = words[i]
                if not value then
                    return nil, ('option "%s" needs a value: write %s %s'):format(word, word, option.value)
                end
            end
            options[option.name] = value or true
        elseif not recipe then
            recipe = word
        else
            rest[#rest + 1] = word
        end
        i = i + 1
    end
    if not recipe then
        return nil, "run which recipe? write thole run RECIPE name=value …"
    end
    return recipe, rest, options
end

local function thread_count(host, text)
    if text == nil then
        return host.processors()
    end
    local n = text:find("^%d+$") and math.tointeger(tonumber(text))
    if not n or n < 1 or n > 256 then
        return nil, ('--threads "%s" is not a whole number of 1 to 256'):format(text)
    end
    return n
end

local function quoted(word)
    return word:find("[^%w_%-%.,/:+@%%=]") and "'" .. word:gsub("'", "'\\''") .. "'" or word
end

-- Resolved folder for outputs, made when it is not there; or nil and what is wrong.
local function out_folder(host, path)
    if path and host.kind(path) == nil then
        local ok, why = host.make_folder(path)
        if not ok then
            return nil, ('cannot make the folder "%s": %s'):format(path, why:lower())
        end
    end
    local resolved, why = host.real(path or ".")
    if not resolved then
        return nil, ('no folder "%s" for outputs: %s'):format(path or ".", why:lower())
    elseif host.kind(resolved) ~= "folder" then
        return nil, ('--out "%s" is not a folder'):format(path)
    end
    return resolved
end

---------------------------------------------------------------------------------------------------
-- thole run

local function check_recipe(host, recipe)
    local kind, why = host.kind(recipe)
    if kind == nil then
        if recipe:find("=", 1, true) then
            return ('"%s" is not a recipe: write thole run RECIPE name=value …'):format(recipe)
        elseif host.kind(recipe .. ".lua") == "file" then
            return ('no recipe "%s": did you mean "%s.lua"?'):format(recipe, recipe)
        end
        return ('cannot open the recipe "%s": %s'):format(recipe, why:lower())
    elseif kind == "folder" then
        return ('"%s" is a folder: name the recipe in it'):format(recipe)
    end
    local file, unreadable = io.open(recipe, "r")
    if not file then
        return "cannot open the recipe: " .. unreadable
    end
    file:close()
end

local function values_given(words)
    local given = {}
    for _, word in ipairs(words) do
        local name, value = word:match("^([^=]+)=(.*)$")
        if name then
            given[name] = value
        end
    end
    return given
end

-- What thole.params works with; also what it leaves for us (declared).
local function describe_run(host, recipe, words)
    local run = { words = words, recipe = recipe, command = "thole run " .. quoted(recipe),
        description = param_help.description(recipe) }
    function run.refuse(text)
        host.finish(USAGE, recipe .. ": " .. text)
    end
    function run.finish()
        host.finish(DONE)
    end
    for _, word in ipairs(words) do
        run.asks_help = run.asks_help or word == "help"
    end
    return run
end

local function no_parameters(run)
    return param_help.text(run, {}, {})
end

-- With help asked for, the recipe runs only up to thole.params. One that reads or writes before it, other than
-- in its own folder, has none.
local function closed_gate(host, run, own, out)
    local own_gate = confine.gate(host, own, out, {}, false)
    return function(path, mode)
        local allowed = mode == "read" and path ~= "-" and own_gate(path, mode)
        if allowed then
            return allowed
        end
        print(no_parameters(run))
        host.finish(DONE)
    end
end

-- The function to run, or nil, what is wrong, and the exit code.
local function prepare(host, recipe, words, options)
    local run = describe_run(host, recipe, words)
    package.loaded["thole.host"] = run
    local out, why = out_folder(host, options.out)
    if not out then
        return nil, why, USAGE
    end
    local folder = confine.split(recipe)
    local own = host.real(folder)
    if not own then
        return nil, ('cannot tell the folder of "%s"'):format(recipe), FAILED
    end
    -- Names of chunks that begin with "thole/" are those of the Lua half.
    local path = recipe:find("^thole/") and "./" .. recipe or recipe
    local shown = path:match("^.*/") or ""
    local gate = run.asks_help and closed_gate(host, run, own, out)
        or confine.gate(host, own, out, values_given(words), options.trust)
    host.gate(gate)
    local f
    if options.trust then
        package.path = folder .. "/?.lua;" .. folder .. "/?/init.lua;" .. package.path
        os.exit = function(code)
            host.finish(code == nil and DONE or code == true and DONE or code == false and FAILED or code)
        end
        f, why = host.load(path)
    else
        f, why = host.load(path, confine.environment(host, gate, own, shown))
    end
    return f, why, FAILED, run
end

local function run_recipe(host, words)
    local recipe, rest, options = parse_run(words)
    if not recipe then
        return usage(host, rest)
    end
    local wrong = check_recipe(host, recipe)
    if wrong then
        return usage(host, wrong)
    end
    local threads, why = thread_count(host, options.threads)
    if not threads then
        return usage(host, why)
    end
    host.threads(threads)
    local f, faulty, code, run = prepare(host, recipe, rest, options)
    if not f then
        if code == FAILED and not faulty:find(recipe .. ":", 1, true) then
            faulty = recipe .. ": " .. faulty
        end
        say(host, faulty)
        return code
    end
    if not options.quiet then
        host.show_progress()
    end
    local ok, text, place, trace = host.call(f, options.trace)
    if host.stopped() then
        return FAILED -- the signal makes the exit code
    end
    local ending, last_words = host.ending()
    if ending then
        if last_words then
            say(host, last_words)
        end
        return ending
    elseif not ok then
        say(host, cause(text, place))
        if trace then
            host.say((trace:gsub("\n%s*%[C%]: in %a+ '[%w_.]*call'\n%s*thole/command%.lua:.*$", "")))
        end
        return FAILED
    elseif run.asks_help and not run.declared then
        print(no_parameters(run))
    elseif #rest > 0 and not run.declared then
        return usage(host, '%s: this recipe has no parameters: leave out "%s"', recipe,
            table.concat(rest, " "))
    end
    return DONE
end

---------------------------------------------------------------------------------------------------
-- thole help and thole version

local function option_lines()
    local lines, width = {}, 0
    for i, option in ipairs(OPTIONS) do
        lines[i] = "--" .. option.name .. (option.value and " " .. option.value or "")
        width = math.max(width, #lines[i])
    end
    for i, option in ipairs(OPTIONS) do
        lines[i] = "  " .. lines[i] .. (" "):rep(width + 2 - #lines[i]) .. option.help
    end
    return table.concat(lines, "\n")
end

local function command_lines()
    local lines = {}
    for i, command in ipairs(COMMANDS) do
        local words = "thole " .. command.words
        lines[i] = "  " .. words .. (" "):rep(34 - utf8.len(words)) .. command.help
    end
    return table.concat(lines, "\n")
end

local function topic_names()
    local names = {}
    for _, topic in ipairs(TOPICS) do
        names[#names + 1] = topic.name
    end
    return names
end

local function overview()
    return ([[
Thole tells when a network that changes through time holds together, when it
falls apart, and which loops it has for how long.

%s

Topics of help: %s.]]):format(command_lines(), table.concat(topic_names(), ", "))
end

-- The name of what recipes can call that a word stands for: "net:keep", "thole.write" or "write".
local function name_in_api(word)
    local api = require "thole.api"
    return api.find(word) and word or api.find("thole." .. word) and "thole." .. word or nil
end

local function show_help(host, words)
    if #words > 2 then
        return usage(host, "help takes one topic: %s", table.concat(topic_names(), ", "))
    elseif not words[2] then
        print(overview())
        return DONE
    end
    for _, topic in ipairs(TOPICS) do
        if topic.name == words[2] then
            if topic.show then
                topic.show()
            else
                print(type(topic.text) == "function" and topic.text() or topic.text)
            end
            return DONE
        end
    end
    local name = name_in_api(words[2])
    if name then
        require("thole.help")(name)
        return DONE
    end
    local names = topic_names()
    local callable = require("thole.api").names()
    local near = nearest.name(words[2], names) or nearest.name(words[2], callable)
        or nearest.name("thole." .. words[2], callable)
    return usage(host, 'no help about "%s": %s', words[2], near and ('did you mean "%s"?'):format(near)
        or "topics are " .. table.concat(names, ", ") .. ", and the names that thole help functions lists")
end

local function show_version(host, words)
    if #words > 1 then
        return usage(host, 'version takes nothing: leave out "%s"', words[2])
    end
    print(("thole %s"):format(require("thole").version))
    return DONE
end

COMMANDS = {
    { name = "run", words = "run RECIPE [name=value …]",
        help = "run a recipe; thole run RECIPE help lists its parameters", call = run_recipe },
    { name = "help", words = "help [TOPIC]", help = "this, or a topic", call = show_help },
    { name = "version", words = "version", help = "the version of Thole", call = show_version },
}
local OTHER_WORDS = { ["--help"] = "help", ["-h"] = "help", ["--version"] = "version" }

TOPICS = {
    { name = "run", text = function()
        return [[
thole run RECIPE [--option …] [name=value …]

Runs RECIPE, a file of Lua. What the recipe lets you choose is given as name=value;
thole run RECIPE help lists it. Paths of inputs are taken from the current folder,
those of outputs from the folder for outputs.

]] .. option_lines() .. [[


Ctrl-C ends a run, leaves earlier outputs as they were and removes what is written
in part; a second Ctrl-C ends it at once.]]
    end },
    { name = "parameters", text = [[
A recipe declares what can be chosen:

  local p = thole.params {
    input   = { thole.needed, type = "file", help = "log of links" },
    length  = "20 min",
    overlap = { 0.5, min = 0, max = 0.99, help = "share that windows have in common" },
    radius  = { 1, one_of = { "graph", 0, 1, 2 } },
  }

and is run with values for some of it:

  thole run week.lua input=week.csv length='1 h'

Types are text, file, number, integer, boolean (true or false), duration and list
(items with commas between: dims=0,1). Without a type it follows from the default.
thole.needed stands for a default where there is none.]] },
    { name = "confinement", text = [[
A recipe is run confined. It reads
  - files that are given on the command line as name=value, and what is in folders given so;
  - what is in its own folder;
  - standard input.
It writes, through thole.write and thole.report only, in the folder of --out (default:
the current one), and to the one file that is given as out=FILE.
It sees no other programs, no environment, no loader of compiled code. require finds
thole and the Lua files beside the recipe. Methods added to the table string are not
methods of texts.

--trust lifts all of that: use it for recipes that you would run as programs.

Confinement limits the harm that a recipe can do; it is no guarantee. It does not limit
time or memory. Do not run recipes of people whom you do not trust at all.]] },
    { name = "functions", show = function() require("thole.help")() end },
    { name = "exit", text = [[
Exit codes of thole:
    0  done
    1  the recipe or its data failed; one line on standard error says why and where
    2  usage: an unknown command, option or parameter, a parameter that is missing or
       has a wrong value, a recipe that cannot be opened
  130  interrupted by Ctrl-C (128 and the number of the signal)]] },
}

--- Do what the words of the command line say; returns the exit code.
return function(host, words)
    local name = OTHER_WORDS[words[1]] or words[1]
    if not name then
        host.say(overview())
        return USAGE
    end
    local names = {}
    for i, command in ipairs(COMMANDS) do
        if command.name == name then
            return command.call(host, words)
        end
        names[i] = command.name
    end
    if name:find("%.lua$") then
        return usage(host, 'no command "%s": to run a recipe write thole run %s', name, quoted(name))
    end
    return usage(host, 'no command "%s": %s', name, nearest.hint(name, names))
end
