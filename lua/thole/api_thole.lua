-- Description of the table `thole`; its form is told in api.lua.

return {
    title = "The table thole", class = "thole",
    {
        name = "thole.version", type = "text", text = "The version of Thole, as 0.1.0.",
        example = "print(thole.version)", prints = "0.1.0",
    },
    {
        name = "thole.needed", type = "needed",
        text = "Stands in place of a default for a parameter that has none and must be given.",
    },
    {
        name = "thole.params",
        text = [[Declares what the user of the recipe can choose on the command line, as name=value, and
returns the values. Each parameter is name = default, or name = { default, help = …, … } with more to
say; a default of thole.needed means that the user must give it, and without any default the value may
be nil. The type follows from the default unless told. Called once in a recipe. `thole run RECIPE help`
lists the parameters.]],
        args = { { "specs", "table", "parameters by name" } },
        options_of = "each parameter",
        options = {
            { "help", "text", nil, "what it means, for the list" },
            { "type", "text", nil,
                'one of "text", "file", "number", "integer", "boolean", "duration", "list"' },
            { "one_of", "table", nil, "list of the values allowed" },
            { "min", "number", nil, "least value" },
            { "max", "number", nil, "greatest value" },
        },
        returns = { { "table", "the values by name" } },
        errors = { "a name that was not declared, with the nearest one",
            "a value of the wrong type or out of range",
            "a needed parameter that is not given" },
        example = [[
local p = thole.params {
    length = { "20 min", help = "length of a window" },
    radius = { 1, min = 0 },
}
print(p.length, p.radius)]],
        prints = "20 min\t1",
    },
    {
        name = "thole.read_contacts",
        text = [[Reads links from a file of delimited text, a row a link, plain or compressed by gzip, zstd
or xz. "-" is standard input. A row without a finish is a contact: a link of one instant. A row whose
two ends are the same place is counted and set aside. Memory follows the network, not the file.]],
        args = { { "path", "text", 'the file, or "-"' },
            { "options", "table", "see below", optional = true } },
        options = {
            { "from", "text|whole", '"from"', "column of one end: its name, or its number from 1" },
            { "to", "text|whole", '"to"', "column of the other end" },
            { "start", "text|whole", '"start"', "column of the time a link begins" },
            { "finish", "text|whole", '"finish"',
                "column of the time it ends; unless named, it need not be there" },
            { "duration", "text|whole", nil, "column of how long it lasts, in place of finish" },
            { "linger", "duration", "0", "how long contacts last" },
            { "separator", "text", "found", '",", ";" or "\\t"' },
            { "header", "boolean", "true", "false: there is no header, columns go by number" },
            { "time", "text", "found",
                '"iso", "epoch" (seconds since 1970-01-01T00:00:00Z) or "plain" numbers' },
            { "zone", "text", "UTC",
                'time zone, as "Atlantic/Azores": of times without offset, and for display' },
            { "unit", "text", '"s"', "name of the unit of plain numbers" },
            { "faulty", "text", '"stop"', '"skip" counts faulty rows by reason instead' },
            { "columns", "text[]", "all", "names of the other columns to keep as attributes" },
        },
        returns = { { "network", "the links by start" } },
        errors = { "a faulty row, with file, line, column, value and what was expected",
            "a column that the header does not name" },
        example = [[
thole.write("legs.csv", net)
local legs = thole.read_contacts("legs.csv", { zone = "Atlantic/Azores" })
print(#legs, table.concat(legs.columns, ", "))]],
        prints = "4\tmode, seats",
    },
    {
        name = "thole.network",
        text = [[Makes a network from Lua. An event is { from, to, start, finish }, by place or by name;
without a finish it is a contact. Other names are attributes, numbers or texts. Without zone and unit,
the first start tells whether times are calendar times.]],
        args = { { "events", "table[]", "the links" }, { "options", "table", "see below", optional = true } },
        options = {
            { "zone", "text", "UTC", 'time zone of calendar times, as "Atlantic/Azores"' },
            { "unit", "text", '"s"', "name of the unit of plain numbers" },
        },
        returns = { { "network", "the links by start" } },
        errors = { "a finish before its start", "an attribute that is a number here and a text there" },
        example = [[
local tides = thole.network { { "A", "B", 0, 6.2 }, { "B", "C", 3, 9.4, boats = 2 } }
print(#tides, tides:span())]],
        prints = "2\t0\t9.4",
    },
    {
        name = "thole.write",
        text = [[Writes a file in the format of its suffix: .csv, .jsonl (one JSON object a line) or .svg (a
chart of a barcode). The file is written beside its name and renamed into place when it is whole; after
an error the old file stands as it was. Text is written as it is.]],
        args = { { "path", "text", "the file; in the host, from the folder of --out" },
            { "thing", "barcode|network|windows|table|text",
                "what to write; a table has columns (a list of names) and rows (a list of lists)" },
            { "options", "table", "see below", optional = true } },
        options = {
            { "format", "format", nil,
                "a format of your own: called as format(thing, out), writes with out:write" },
            { "view", "text", '"barcode"', 'of an .svg: "barcode" or "diagram"' },
            { "dim", "whole", "all", "of an .svg: the dimension to show" },
            { "dims", "whole[]", "all", "of an .svg: the dimensions to show" },
            { "title", "text", nil, "of an .svg" },
            { "width", "number", "1200", "of an .svg, in pixels" },
        },
        errors = { "a suffix without a format", "what the system says of a file that cannot be written" },
        example = [[
thole.write("loops.txt", bars, { format = function(b, out)
    for bar in b:each { dim = 1 } do out:write(bar.opens, " ", bar.closes, "\n") end
end })
thole.write("bars.csv", bars)]],
        prints = "",
    },
    {
        name = "thole.report",
        text = [[Writes one HTML file that holds everything it shows: it fetches nothing and runs no script.
A part is a table that begins with its name: { "account", net = net }, { "findings", bars =, net = }, {
"betti", { bars, dim = 0, label = … }, … }, { "barcode", { bars, title = … }, … }, { "diagram", { bars,
dim = 1, title = … }, … }, { "longest", bars =, dim =, most = 10, net = }, { "days", net =, bars = }, {
"method", recipe =, parameters =, net =, bars = { … } }, { "text", title =, "…" }, { "caution" }. The
list may have a title and a lead, the paragraph below it.]],
        args = { { "path", "text", "the file; in the host, from the folder of --out" },
            { "parts", "table", "the parts in their order, with title and lead" } },
        errors = { "a part that is not known, with the nearest one" },
        example = [[
thole.report("morning.html", { title = "A morning", { "account", net = net }, { "barcode", { bars } }, { "caution" } })]],
        prints = "",
    },
    {
        name = "thole.threads",
        text = [[Sets how many worker threads the computation uses, and tells. Results are the same for any
number. The host sets it from --threads; in the stock interpreter it begins at 1.]],
        args = { { "n", "whole", "from 1 to 256; left out, nothing changes", optional = true } },
        returns = { { "whole", "the number in use" } },
        example = "print(thole.threads(2))", prints = "2",
    },
    {
        name = "thole.help",
        text = "Prints what this reference says of a name, or the list of names.",
        args = { { "name", "text", 'as "net:keep" or "sliding"', optional = true } },
        errors = { "a name that is not known, with the nearest one" },
        example = 'thole.help("net:span")',
        prints = [[
net:span()
The first start and the last finish of the links in view; nothing when there are none.
returns time: the first start
returns time: the last finish
example
  print(net:span())]],
    },
}
