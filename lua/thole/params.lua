--- thole.params: what a recipe lets its user choose, given on the command line as name=value.
--
-- The words of the command line come from the host when there is one, else from the global `arg` of
-- the stock interpreter. In the host a refusal ends the run with exit code 2; in the
-- stock interpreter it is an ordinary error.

local nearest = require "thole.nearest"
local kinds = require "thole.param_types"
local help = require "thole.param_help"
local types, show = kinds.types, help.show

--- Stands where a default would, for a parameter that has none.
local needed = setmetatable({}, { __tostring = function() return "thole.needed" end, __metatable = false })

local SPEC_KEYS = { "help", "max", "min", "one_of", "type" }
local is_spec_key = {}
for _, key in ipairs(SPEC_KEYS) do
    is_spec_key[key] = true
end

-- What is raised for mistakes of the recipe's author (at the recipe's line) and of its user.
local function author(text, ...)
    error({ author = text:format(...) })
end
local function user(text, ...)
    error({ user = text:format(...) })
end

---------------------------------------------------------------------------------------------------
-- What the recipe declares.

-- Why a value lies outside of what is allowed, or nil.
local function outside(param, value)
    if not param.min and not param.max then
        return nil
    elseif type(value) ~= "number" then
        return "is not a number: give one of " .. help.show_range(param)
    elseif (param.min and value < param.min) or (param.max and value > param.max) then
        return "is out of range: give " .. help.show_range(param)
    end
end

-- The allowed value that looks like this one, or nil and why there is none.
local function chosen(param, value)
    if not param.one_of then
        return value
    end
    local names = {}
    for i, allowed in ipairs(param.one_of) do
        if allowed == value or show(allowed) == show(value) then
            return allowed
        end
        names[i] = show(allowed)
    end
    local near = nearest.name(show(value), names)
    return nil, ("is not one of %s%s"):format(table.concat(names, ", "),
        near and (': did you mean "%s"?'):format(near) or "")
end

-- The value after the checks of one_of, min and max, of each item where it is a list; or nil and what is
-- wrong.
local function allowed(param, value)
    if type(value) ~= "table" then
        local choice, why = chosen(param, value)
        why = why or outside(param, choice)
        if why then
            return nil, why
        end
        return choice
    end
    local list = {}
    for i, item in ipairs(value) do
        local choice, why = chosen(param, item)
        why = why or outside(param, choice)
        if why then
            return nil, ('has "%s", which %s'):format(show(item), why)
        end
        list[i] = choice
    end
    return list
end

local function check_default(param)
    local name, default = param.name, param.default
    if param.type == "duration" then
        local text = type(default) == "number" and show(default) or default
        if type(text) ~= "string" or not kinds.is_duration(text) then
            author('the default of parameter "%s" is not a duration: write for example "20 min"', name)
        end
    elseif not param.one_of and (type(default) ~= types[param.type].lua
        or (param.type == "integer" and not math.tointeger(default))) then
        author('the default of parameter "%s" is not of type %s: change the default or the type', name,
            param.type)
    end
    local value, why = allowed(param, default)
    if value == nil then
        author('the default of parameter "%s", "%s", %s: change the default or what is allowed', name,
            show(default), why)
    end
end

-- Is a table a list that is itself the default: {0, 1}? Else its first item is the default.
local function is_plain_list(spec)
    for key in pairs(spec) do
        if math.type(key) ~= "integer" then
            return false
        end
    end
    return #spec ~= 1
end

local function declared(name, spec)
    if type(name) ~= "string" or not name:find("^[%a_][%w_]*$") or name == "help" then
        author('"%s" cannot be the name of a parameter: use letters, digits and "_", and not the word help',
            tostring(name))
    end
    if type(spec) ~= "table" or spec == needed or is_plain_list(spec) then
        spec = { spec }
    end
    for key in pairs(spec) do
        if key ~= 1 and not is_spec_key[key] then
            if math.type(key) == "integer" then
                author('parameter "%s" has more than one default: write a list as { { … }, help = … }',
                    name)
            end
            author('"%s" says nothing about parameter "%s": %s', tostring(key), name,
                nearest.hint(tostring(key), SPEC_KEYS))
        end
    end
    local default = spec[1]
    local is_needed = default == needed
    if is_needed then
        default = nil
    end
    local param = { name = name, help = spec.help, one_of = spec.one_of, min = spec.min, max = spec.max,
        needed = is_needed, type = spec.type or kinds.inferred(default) }
    if not types[param.type] then
        author('"%s" is not a type of parameter: %s', tostring(param.type),
            nearest.hint(tostring(param.type), kinds.names))
    elseif param.one_of ~= nil and (type(param.one_of) ~= "table" or #param.one_of == 0) then
        author('one_of of parameter "%s" is not a list with items', name)
    end
    for _, key in ipairs { "min", "max" } do
        if param[key] ~= nil and type(param[key]) ~= "number" then
            author('%s of parameter "%s" is not a number', key, name)
        end
    end
    if default ~= nil then
        param.default = default
        param.items = param.type == "list" and type(default) == "table" and kinds.items_kind(default) or "any"
        check_default(param)
    end
    return param
end

-- All parameters: by name, and in the order of help: needed ones first.
local function declare(specs)
    if type(specs) ~= "table" then
        author("thole.params takes a table: write thole.params { input = thole.needed }")
    end
    local params, order = {}, {}
    for name, spec in pairs(specs) do
        params[name] = declared(name, spec)
        order[#order + 1] = name
    end
    table.sort(order, function(a, b)
        if params[a].needed ~= params[b].needed then
            return params[a].needed
        end
        return a < b
    end)
    return params, order
end

---------------------------------------------------------------------------------------------------
-- What the user gave.

-- Values by name, from the words of the command line; true as well when help is asked for.
local function words_given(words)
    local given, asks_help = {}, false
    for _, word in ipairs(words) do
        local name, value = word:match("^([%a_][%w_%-]*)=(.*)$")
        if word == "help" then
            asks_help = true
        elseif not name then
            user('"%s" is not a parameter: write name=value', word)
        elseif given[name] then
            user('parameter "%s" is given twice, as "%s" and as "%s": give it once', name, given[name], value)
        else
            given[name] = value
        end
    end
    return given, asks_help
end

local function refuse_unknown(words, params, order)
    for _, word in ipairs(words) do
        local name = word:match("^([^=]*)=")
        if name and not params[name] then
            user('no parameter "%s": %s', name, nearest.hint(name, order) or "this recipe has no parameters")
        end
    end
end

local function value_of(param, text)
    local value, why
    if param.one_of and param.type ~= "list" then
        value = text -- takes the type of the one that it is
    else
        value, why = types[param.type].from(text, param)
    end
    if value == nil then
        local cure = why:find("?", 1, true) and ""
            or (": give %s, for example %s"):format(types[param.type].want, help.example(param))
        user('%s="%s" %s%s', param.name, text, why, cure)
    end
    value, why = allowed(param, value)
    if value == nil then
        user('%s="%s" %s', param.name, text, why)
    end
    return value
end

local function copied(value)
    return type(value) == "table" and table.move(value, 1, #value, 1, {}) or value
end

local function values(run, params, order, given)
    local result, missing = {}, {}
    for _, name in ipairs(order) do
        local param = params[name]
        if given[name] ~= nil then
            result[name] = value_of(param, given[name])
        elseif param.needed then
            missing[#missing + 1] = ('"%s"'):format(name)
        else
            result[name] = copied(param.default)
        end
    end
    if #missing > 0 then
        user("%s %s needed: for example %s", table.concat(missing, " and "), #missing == 1 and "is" or "are",
            help.example_line(run, params, order))
    end
    return result
end

-- The values as a table in which a misspelt name is an error, not nil.
local function guarded(result, params, order)
    return setmetatable(result, {
        __index = function(_, name)
            if not params[name] then
                error(('no parameter "%s": %s'):format(tostring(name),
                    nearest.hint(tostring(name), order) or "none is declared"), 2)
            end
        end,
    })
end

---------------------------------------------------------------------------------------------------

-- The run that this recipe is in: `words` of the command line, the `recipe` and `command` to name in
-- messages, the recipe's `description`, and what to do to `refuse` with a text or to `finish` well.
local function stock_run()
    local words = type(arg) == "table" and arg or {}
    local recipe = type(words[0]) == "string" and words[0] or "recipe"
    return {
        words = words, recipe = recipe, command = "lua5.4 " .. recipe,
        description = help.description(recipe),
        finish = function() os.exit(0, true) end,
    }
end

local function read(run, specs)
    local params, order = declare(specs)
    local given, asks_help = words_given(run.words)
    if asks_help then
        print(help.text(run, params, order))
        return run.finish()
    end
    refuse_unknown(run.words, params, order)
    return guarded(values(run, params, order, given), params, order)
end

--- Declare the recipe's parameters and return their values.
-- Each is name = default, name = thole.needed, or name = { default or thole.needed, help =, type =, one_of =,
-- min =, max = }; types are text, file, number, integer, boolean, duration and list. Without a type it
-- follows from the default: a number's, a boolean's, a list's, a duration's ("20 min") or a text's.
-- { type = … } alone has no default: nil.
local function params(specs)
    local run = package.loaded["thole.host"] or stock_run()
    if run.declared then
        error("thole.params is called twice: declare all parameters in one call", 2)
    end
    run.declared = true
    local ok, result = pcall(read, run, specs)
    if ok then
        return result
    elseif type(result) == "table" and result.user then
        if run.refuse then
            run.refuse(result.user)
        end
        error(result.user, 2)
    elseif type(result) == "table" and result.author then
        error(result.author, 2)
    end
    error(result, 0)
end

return setmetatable({ needed = needed, params = params }, {
    __call = function(_, specs) return params(specs) end,
})
