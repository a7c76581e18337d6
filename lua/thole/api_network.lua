-- Description of networks, links and summaries; its form is told in api.lua.

return {
    title = "Networks", class = "thole.Network",
    text = "A network is links in time. Filters make new networks that share its storage; none changes it.",
    { name = "#net", type = "whole", text = "The number of links in view.", example = "print(#net)",
        prints = "4" },
    { name = "net.columns", type = "text[]", text = "Names of the attributes of links.",
        example = 'print(table.concat(net.columns, " "))', prints = "mode seats" },
    { name = "net.zone", type = "text|nil", text = "The time zone of a calendar clock; nil on a plain one.",
        example = "print(net.zone)", prints = "Atlantic/Azores" },
    { name = "net.unit", type = "text",
        text = 'The unit of durations that are numbers: "s" on a calendar clock.',
        example = "print(net.unit)", prints = "s" },
    {
        name = "net:keep",
        text = [[The links for which a filter holds. A table is run by the core, and holds where all of its
conditions do: mode = "ferry" (equal), route = { "A", "B" } (one of these), seats = { min = 40, max = 90
} (bounds included), wet = true (there is a value) or false (there is none), any = { filter, … }, all =
{ filter, … }, no = filter. Fields are from, to, start, finish, duration and the attributes. A missing
attribute fails every comparison. A function is called with each link, and keeps those for which it
returns neither false nor nil.]],
        args = { { "filter", "filter|asks", "what to keep" } },
        returns = { { "network", "a view of the links kept" } },
        errors = { "a field that no link has, with the nearest one",
            "a value of a type that the field never has",
            "an error inside the function, as it is" },
        example = [[
print(#net:keep { mode = "ferry" }, #net:keep { any = { { seats = { min = 100 } }, { seats = false } } })
print(#net:keep(function(link) return link.duration > 1200 end))]],
        prints = "2\t2\n2",
    },
    {
        name = "net:drop", text = "The links for which a filter does not hold: the others of net:keep.",
        args = { { "filter", "filter|asks", "what to leave out" } },
        returns = { { "network", "a view of the links left" } },
        example = 'print(#net:drop { mode = "bus" })', prints = "2",
    },
    {
        name = "net:between",
        text = [[The links active at some instant from start on and before finish. They keep their own
times. A contact is active at its instant.]],
        args = { { "start", "time", "included" }, { "finish", "time", "not included" } },
        returns = { { "network", "a view of these links" } },
        errors = { "a finish that is not after the start" },
        example = 'print(#net:between("2031-03-03T06:00", "2031-03-03T06:20"))', prints = "1",
    },
    {
        name = "net:each",
        text = [[Goes through the links by start. The loop's variable is one object that shows each link in
turn: take from it what is needed, do not keep it.]],
        args = {},
        returns = { { "links", "for a for loop" } },
        example = [[
for link in net:each() do
    print(link.from, link.duration, link.seats)
end]],
        prints = "Brindle Quay\t2400\t120\nSaltmarket\t2400\t32\nCustoms Steps\t1200\t32\nHollow Bay\t1200\tnil",
    },
    {
        name = "net:nodes",
            text = "Names of the places that links in view have, in the order in which they were read.",
        args = {}, returns = { { "text[]", "the names" } },
        example = 'print(table.concat(net:nodes(), ", "))',
            prints = "Brindle Quay, Saltmarket, Customs Steps, Hollow Bay",
    },
    {
        name = "net:span",
            text = "The first start and the last finish of the links in view; nothing when there are none.",
        args = {}, returns = { { "time", "the first start" }, { "time", "the last finish" } },
        example = "print(net:span())", prints = "2031-03-03T06:00:00-01:00\t2031-03-03T07:20:00-01:00",
    },
    {
        name = "net:summary",
            text = "What was read, what was set aside, and what is in view, as a table that prints well.",
        args = {}, returns = { { "summary", "the counts" } },
        example = 'local s = net:summary()\nprint(s.events, s.nodes, s.links, s.first)',
        prints = "4\t4\t4\t2031-03-03T06:00:00-01:00",
    },
    {
        name = "net:zigzag",
        text = [[Computes which pieces, loops and holes last how long, as the zigzag of homology over the
windows, with coefficients in Z/2. Radius "graph" sees places and links alone; 0 sees places alone; 1
fills in all places that are linked each to each; 2 and more do so with places that many links apart or
nearer.]],
        args = { { "options", "table", "windows must be there" } },
        options = {
            { "windows", "windows", "needed", "the windows, over the same clock" },
            { "radius", "text|whole", "1", '"graph", or a number of links from 0' },
            { "dims", "whole[]", "{ 0, 1 }",
                "dimensions: 0 for pieces, 1 for loops, 2 for hollows, up to 7" },
            { "join", "text", '"union"',
                '"union": a join has the links of both windows; "intersection": those that both have' },
            { "nodes", "text", '"linked"', '"all": every place of the view is in every window' },
            { "max_memory", "text|whole", "80 % of the machine", 'most memory to use, as "8 GB", or bytes' },
            { "block", "whole", "chosen",
                "positions that a block of time spans; results do not depend on it" },
        },
        returns = { { "barcode", "the bars" } },
        errors = { "a request that needs more memory than it may have, with what to lower" },
        example = [[
local filled = net:zigzag { windows = cuts, radius = 1, dims = { 0, 1 } }
print(#filled, filled:count { dim = 1 })]],
        prints = "1\t0",
    },
    {
        name = "net:close", text = "Gives the network back. Views made from it live on.", args = {},
        example = "net:close()\nprint(net)", prints = "closed network",
    },
    { name = "link.from", class = "thole.Link", type = "text", text = "Name of one end." },
    { name = "link.to", class = "thole.Link", type = "text", text = "Name of the other end." },
    { name = "link.start", class = "thole.Link", type = "time", text = "When it begins." },
    { name = "link.finish", class = "thole.Link", type = "time",
        text = "When it ends: it is no longer active then." },
    { name = "link.duration", class = "thole.Link", type = "number",
        text = "How long it lasts, in the clock's unit." },
    { name = "link.<attribute>", class = "thole.Link", type = "text|number|nil",
        text = "An attribute, by its name; nil where it is missing.",
        example = "for link in net:each() do print(link.mode) break end", prints = "ferry" },
    { name = "summary.source", class = "thole.Summary", type = "text", text = "What was read." },
    { name = "summary.rows", class = "thole.Summary", type = "whole", text = "Rows seen." },
    { name = "summary.read", class = "thole.Summary", type = "whole", text = "Rows that became links." },
    { name = "summary.self_loops", class = "thole.Summary", type = "whole",
        text = "Rows set aside because both ends are the same place." },
    { name = "summary.skipped", class = "thole.Summary", type = "whole", text = "Rows set aside as faulty." },
    { name = "summary.reasons", class = "thole.Summary", type = "tally[]",
        text = "Why rows were set aside as faulty." },
    { name = "summary.repeats", class = "thole.Summary", type = "whole",
        text = "Links that repeat another in both ends and both times; they are kept." },
    { name = "summary.remarks", class = "thole.Summary", type = "tally[]",
        text = "What was kept, but is worth a remark." },
    { name = "summary.events", class = "thole.Summary", type = "whole", text = "Links in view." },
    { name = "summary.contacts", class = "thole.Summary", type = "whole",
        text = "Of these, contacts: links of one instant." },
    { name = "summary.nodes", class = "thole.Summary", type = "whole",
        text = "Places that links in view have." },
    { name = "summary.links", class = "thole.Summary", type = "whole",
        text = "Pairs of places linked at some time." },
    { name = "summary.first", class = "thole.Summary", type = "time|nil", text = "First start in view." },
    { name = "summary.last", class = "thole.Summary", type = "time|nil", text = "Last finish in view." },
    { name = "summary.zone", class = "thole.Summary", type = "text|nil",
        text = "The zone of a calendar clock." },
    { name = "summary.unit", class = "thole.Summary", type = "text", text = "The clock's unit." },
    { name = "summary.bytes", class = "thole.Summary", type = "whole",
        text = "Memory that the network takes, in bytes." },
    { name = "tally.what", class = "thole.Tally", type = "text", text = "What was counted." },
    { name = "tally.count", class = "thole.Tally", type = "whole", text = "How often." },
    { name = "tally.first_line", class = "thole.Tally", type = "whole",
        text = "The line of the first one; 0 when there is none." },
}
