-- Description of windows and the rules that make them; its form is told in api.lua.

return {
    title = "Windows", class = "thole.Windows",
    text = [[Windows cut time into half-open intervals: a link is in a window when it is active at some
instant of it, the window's finish not included. Windows are in order of their start; they may overlap
and leave gaps.]],
    {
        name = "thole.windows.sliding",
        text = [[Windows of one length, each starting a step after the one before. They begin at the first
start of the links and go on until one reaches their last finish; a contact at the very end is in a
window too.]],
        args = { { "net", "network", "whose clock and span they have" },
            { "options", "table", "length must be there" } },
        options = {
            { "length", "duration", "needed", "of each window" },
            { "overlap", "number", "0", "share of a window that the next one has too, from 0 to below 1" },
            { "step", "duration", "the length", "from one start to the next, in place of overlap" },
            { "start", "time", "the links' first start", "start of the first window" },
            { "finish", "time", "the links' last finish", "windows go on until one reaches it" },
        },
        returns = { { "windows", "in order" } },
        errors = { "both a step and an overlap",
            "a network without links, where start or finish is not given" },
        example = [[
local w = thole.windows.sliding(net, { length = "20 min", overlap = 0.5 })
print(#w, w[2].start)]],
        prints = "7\t2031-03-03T06:10:00-01:00",
    },
    {
        name = "thole.windows.list",
        text = [[Windows that are listed: { start, finish, label } by place, or start =, finish =, label =
by name; or in a file of delimited text whose header names start, finish and perhaps label.]],
        args = { { "net", "network", "whose clock they have" },
            { "list", "table[]|text", 'the windows, or the path of a file ("-" is standard input)' } },
        returns = { { "windows", "in the order given" } },
        errors = { "a window that is empty, or that starts before the one ahead of it, by its number or line" },
        example = [[
local w = thole.windows.list(net, { { "2031-03-03T06:00", "2031-03-03T06:30", "early" },
    { start = "2031-03-03T06:30", finish = "2031-03-03T07:30", label = "late" } })
print(#w, w[2].label)]],
        prints = "2\tlate",
    },
    {
        name = "thole.windows.by",
        text = [[Windows by a rule of your own. A function that yields start, finish and perhaps a label, with
coroutine.yield, gives a window each time until it ends. One that returns them is called again and again, as
rule(number, start and finish of the window before), until it returns nil.]],
        args = { { "net", "network", "whose clock they have" }, { "rule", "rule", "the rule" } },
        returns = { { "windows", "in the order given" } },
        errors = { "an error inside the function, as it is", "windows out of order, or empty" },
        example = [[
local six = 1930287600 -- 2031-03-03T06:00:00-01:00 in seconds
local w = thole.windows.by(net, function()
    for hour = 0, 1 do
        coroutine.yield(six + hour * 3600, six + hour * 3600 + 1800, "first half of hour " .. hour)
    end
end)
print(#w, w[1].start, w[2].label)]],
        prints = "2\t2031-03-03T06:00:00-01:00\tfirst half of hour 1",
    },
    { name = "#w", type = "whole", text = "The number of windows.", example = "print(#cuts)", prints = "4" },
    { name = "w[i]", type = "window|nil", text = "Window i, from 1; nil where there is none.",
        example = "print(cuts[1].finish, cuts[9])", prints = "2031-03-03T06:20:00-01:00\tnil" },
    {
        name = "w:each", text = "Goes through the windows in order.", args = {},
        returns = { { "cuts", "for a for loop" } },
        example = "for window in cuts:each() do print(window.index, window.start) break end",
        prints = "1\t2031-03-03T06:00:00-01:00",
    },
    { name = "w:close", text = "Gives the windows back. Barcodes made with them live on.", args = {},
        example = "cuts:close()\nprint(cuts, #bars.windows)", prints = "closed windows\t4" },
    { name = "window.start", class = "thole.Window", type = "time", text = "The first instant of it." },
    { name = "window.finish", class = "thole.Window", type = "time", text = "The first instant after it." },
    { name = "window.label", class = "thole.Window", type = "text",
        text = 'Its label; "" when it has none.' },
    { name = "window.index", class = "thole.Window", type = "whole", text = "Its number, from 1." },
}
