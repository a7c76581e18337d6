-- thole.write(path, thing, opts): write a result to a file, in a format found from the name's suffix
-- or given by a function. The file is written beside its name and renamed into place when whole; an
-- error leaves an older file as it was and nothing new behind.

local native = require "thole.native"
local options = require "thole.options"
local rows = require "thole.write_rows"

-- Charts by opts.view. Each takes the barcode and the options and returns a drawing.
local VIEWS = {
    barcode = function(barcode, opts)
        local dims = opts.dim and { opts.dim } or opts.dims
        return require("thole.svg_barcode").draw(barcode, { dims = dims, title = opts.title })
    end,
    diagram = function(barcode, opts)
        return require("thole.svg_diagram").draw(barcode, { dim = opts.dim, title = opts.title })
    end,
}

local function write_svg(thing, out, opts)
    if rows.kind(thing) ~= "barcode" then
        native.fail("an SVG file shows a barcode: give the result of net:zigzag, or write this as .csv or "
            .. ".jsonl")
    end
    local view = opts.view or "barcode"
    if not VIEWS[view] then
        native.fail(('there is no view "%s": use "barcode" or "diagram"'):format(view))
    end
    local drawn = VIEWS[view](thing, opts)
    local width = drawn.square and drawn.height + drawn.left + 16 or opts.width or 1200
    out:write(require("thole.svg").document(drawn, width))
end

-- Formats by suffix: a new one is a file and a line here.
local FORMATS = {
    csv = require "thole.write_csv",
    jsonl = require "thole.write_jsonl",
    svg = write_svg,
}

local KNOWN = { format = "function", view = "string", dim = "number", dims = "table", title = "string",
    width = "number" }

local function write_text(text, out)
    out:write(text)
end

local function format_for(path, thing, opts)
    if opts.format then return opts.format end
    local kind = rows.kind(thing)
    if kind == "text" then return write_text end
    local suffix = path:match("%.(%w+)$")
    local format = suffix and FORMATS[suffix:lower()]
    if not format then
        native.fail(('no format is known for "%s": end the name in .csv, .jsonl or .svg, '
            .. "or give format = function(thing, out) … end"):format(path))
    elseif not kind then
        native.fail(("%s can not be written: give a barcode, a network, windows, a table with columns and "
            .. "rows, "
            .. "or text"):format(options.article(options.kind(thing))))
    end
    return format
end

return function(path, thing, opts)
    if type(path) ~= "string" then
        native.fail("the name of the file to write must be text, not " .. options.article(type(path)))
    end
    opts = options.check(opts, KNOWN, "thole.write")
    local format = format_for(path, thing, opts)
    local out <close> = native.create(path)
    format(thing, out, opts)
    out:commit()
end
