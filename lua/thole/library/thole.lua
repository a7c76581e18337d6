---@meta thole

-- For editors only: names, types and units. Made by lua/thole/describe.lua from lua/thole/api*.lua.

--- On a calendar clock a time is ISO 8601 text with its offset, in the network's zone:
--- "2031-03-03T06:20:00-01:00". Where a time is taken, such text will do; without an offset it is local
--- time. So will a number: seconds since 1970-01-01T00:00:00Z. On a plain clock a time is a number, whole
--- where it can be, and numbers or their text are taken. All times are exact to a billionth of the unit;
--- what is finer is refused.
---@alias thole.Time string|number

--- Text with units, added up: "20 min", "1 h 30 min", "2 d"; or a number in the clock's unit, which is the
--- second on a calendar clock. On a plain clock with another unit: numbers, or numbers with that unit's name.
---@alias thole.Duration string|number

---@alias thole.Filter table<string, any>
---@class thole.Needed

---@class thole.Network
---@operator len: integer
---@field columns string[] Names of the attributes of links.
---@field zone string|nil The time zone of a calendar clock; nil on a plain one.
---@field unit string The unit of durations that are numbers: "s" on a calendar clock.
local Network = {}

--- The links for which a filter holds. A table is run by the core, and holds where all of its
--- conditions do: mode = "ferry" (equal), route = { "A", "B" } (one of these), seats = { min = 40, max = 90
--- } (bounds included), wet = true (there is a value) or false (there is none), any = { filter, … }, all =
--- { filter, … }, no = filter. Fields are from, to, start, finish, duration and the attributes. A missing
--- attribute fails every comparison. A function is called with each link, and keeps those for which it
--- returns neither false nor nil.
--- ```lua
--- print(#net:keep { mode = "ferry" }, #net:keep { any = { { seats = { min = 100 } }, { seats = false } } })
--- print(#net:keep(function(link) return link.duration > 1200 end))
--- ```
---@param filter thole.Filter|fun(link: thole.Link): any what to keep
---@return thole.Network # a view of the links kept
function Network:keep(filter) end

--- The links for which a filter does not hold: the others of net:keep.
--- ```lua
--- print(#net:drop { mode = "bus" })
--- ```
---@param filter thole.Filter|fun(link: thole.Link): any what to leave out
---@return thole.Network # a view of the links left
function Network:drop(filter) end

--- The links active at some instant from start on and before finish. They keep their own
--- times. A contact is active at its instant.
--- ```lua
--- print(#net:between("2031-03-03T06:00", "2031-03-03T06:20"))
--- ```
---@param start thole.Time included
---@param finish thole.Time not included
---@return thole.Network # a view of these links
function Network:between(start, finish) end

--- Goes through the links by start. The loop's variable is one object that shows each link in
--- turn: take from it what is needed, do not keep it.
--- ```lua
--- for link in net:each() do
---     print(link.from, link.duration, link.seats)
--- end
--- ```
---@return fun(): thole.Link # for a for loop
function Network:each() end

--- Names of the places that links in view have, in the order in which they were read.
--- ```lua
--- print(table.concat(net:nodes(), ", "))
--- ```
---@return string[] # the names
function Network:nodes() end

--- The first start and the last finish of the links in view; nothing when there are none.
--- ```lua
--- print(net:span())
--- ```
---@return thole.Time # the first start
---@return thole.Time # the last finish
function Network:span() end

--- What was read, what was set aside, and what is in view, as a table that prints well.
--- ```lua
--- local s = net:summary()
--- print(s.events, s.nodes, s.links, s.first)
--- ```
---@return thole.Summary # the counts
function Network:summary() end

---@class thole.ZigzagOptions
---@field windows thole.Windows the windows, over the same clock
---@field radius? string|integer "graph", or a number of links from 0 (default: 1)
---@field dims? integer[] dimensions: 0 for pieces, 1 for loops, 2 for hollows, up to 7 (default: { 0, 1 })
---@field join? string "union": a join has the links of both windows; "intersection": those that both have (default: "union")
---@field nodes? string "all": every place of the view is in every window (default: "linked")
---@field max_memory? string|integer most memory to use, as "8 GB", or bytes (default: 80 % of the machine)
---@field block? integer positions that a block of time spans; results do not depend on it (default: chosen)

--- Computes which pieces, loops and holes last how long, as the zigzag of homology over the
--- windows, with coefficients in Z/2. Radius "graph" sees places and links alone; 0 sees places alone; 1
--- fills in all places that are linked each to each; 2 and more do so with places that many links apart or
--- nearer.
--- ```lua
--- local filled = net:zigzag { windows = cuts, radius = 1, dims = { 0, 1 } }
--- print(#filled, filled:count { dim = 1 })
--- ```
---@param options thole.ZigzagOptions windows must be there
---@return thole.Barcode # the bars
function Network:zigzag(options) end

--- Gives the network back. Views made from it live on.
--- ```lua
--- net:close()
--- print(net)
--- ```
function Network:close() end

---@class thole.Link
---@field from string Name of one end.
---@field to string Name of the other end.
---@field start thole.Time When it begins.
---@field finish thole.Time When it ends: it is no longer active then.
---@field duration number How long it lasts, in the clock's unit.
---@field [string] string|number|nil An attribute, by its name; nil where it is missing.
local Link = {}

---@class thole.Summary
---@field source string What was read.
---@field rows integer Rows seen.
---@field read integer Rows that became links.
---@field self_loops integer Rows set aside because both ends are the same place.
---@field skipped integer Rows set aside as faulty.
---@field reasons thole.Tally[] Why rows were set aside as faulty.
---@field repeats integer Links that repeat another in both ends and both times; they are kept.
---@field remarks thole.Tally[] What was kept, but is worth a remark.
---@field events integer Links in view.
---@field contacts integer Of these, contacts: links of one instant.
---@field nodes integer Places that links in view have.
---@field links integer Pairs of places linked at some time.
---@field first thole.Time|nil First start in view.
---@field last thole.Time|nil Last finish in view.
---@field zone string|nil The zone of a calendar clock.
---@field unit string The clock's unit.
---@field bytes integer Memory that the network takes, in bytes.
local Summary = {}

---@class thole.Tally
---@field what string What was counted.
---@field count integer How often.
---@field first_line integer The line of the first one; 0 when there is none.
local Tally = {}

---@class thole.Windows
---@operator len: integer
---@field [integer] thole.Window|nil Window i, from 1; nil where there is none.
local Windows = {}

--- Goes through the windows in order.
--- ```lua
--- for window in cuts:each() do print(window.index, window.start) break end
--- ```
---@return fun(): thole.Window # for a for loop
function Windows:each() end

--- Gives the windows back. Barcodes made with them live on.
--- ```lua
--- cuts:close()
--- print(cuts, #bars.windows)
--- ```
function Windows:close() end

---@class thole.Window
---@field start thole.Time The first instant of it.
---@field finish thole.Time The first instant after it.
---@field label string Its label; "" when it has none.
---@field index integer Its number, from 1.
local Window = {}

---@class thole.Barcode
---@operator len: integer
---@field windows thole.Windows The windows it was computed over.
---@field radius string|integer "graph", or the number of links.
---@field join string "union" or "intersection".
---@field dims integer[] The dimensions that were computed.
---@field nodes string "linked" or "all".
---@field zone string|nil The time zone of a calendar clock; nil on a plain one.
---@field unit string The unit of lifespans.
---@field cells integer[] How many cells of each dimension, from 0, the computation was of: a place, link or simplex counts once each time it appears.
---@field peak_bytes integer Most memory that the computation used, in bytes.
local Barcode = {}

---@class thole.BarsEachOptions
---@field dim? integer only bars of this dimension (default: all)
---@field kind? string only bars of this kind, as "closed-open" (default: all)
---@field at? number only bars alive in this window, or in this join: 1, 1.5, 2 and so on (default: all)
---@field shortest_lifespan? thole.Duration only bars that last this long or longer (default: all)
---@field longest? integer only so many, the longest; the longest first, equally long ones in order (default: all)

--- Goes through the bars, by dimension, first, last and kind, or the longest first. Each is a table of its own.
--- ```lua
--- for bar in bars:each { dim = 1 } do
---     print(bar.first, bar.last, bar.kind, bar.lifespan)
--- end
--- ```
---@param options? thole.BarsEachOptions which bars; left out, all
---@return fun(): thole.Bar # for a for loop
function Barcode:each(options) end

---@class thole.BarsCountOptions
---@field dim? integer only bars of this dimension (default: all)
---@field kind? string only bars of this kind, as "closed-open" (default: all)
---@field at? number only bars alive in this window, or in this join: 1, 1.5, 2 and so on (default: all)
---@field shortest_lifespan? thole.Duration only bars that last this long or longer (default: all)
---@field longest? integer only so many, the longest; the longest first, equally long ones in order (default: all)

--- How many bars there are.
--- ```lua
--- print(bars:count { dim = 0, at = 2 }, bars:count { shortest_lifespan = "30 min" })
--- ```
---@param options? thole.BarsCountOptions which bars; left out, all
---@return integer # the number
function Barcode:count(options) end

---@class thole.BarsBettiOptions
---@field joins? boolean true: one number a position, joins too (default: false)

--- Betti numbers: how many pieces (dimension 0), loops (1) or holes there are in each window.
--- ```lua
--- print(table.concat(bars:betti(1), " "))
--- print(table.concat(bars:betti(0, { joins = true }), " "))
--- ```
---@param dim integer the dimension
---@param options? thole.BarsBettiOptions see below
---@return integer[] # one number a window
function Barcode:betti(dim, options) end

--- The exact text of a field of a bar, as files have it. On a plain clock a centre may lie
--- between what numbers of Lua can tell apart.
--- ```lua
--- print(bars:text(1, "birth"), bars:text(1, "last"))
--- ```
---@param index integer the bar's number
---@param field string "birth", "death", "opens", "closes", "first" or "last"
---@return string # as in files
function Barcode:text(index, field) end

---@class thole.BarsCarriersOptions
---@field at? number window from 1, or the half between two
---@field dim? integer 0 for pieces, 1 for loops (default: 1)

--- Which places the bars alive at a window or join run through there. A piece is told as its places;
--- a bar that tells two pieces apart, as both. A loop is told as closed walks: places in order, the first not
--- repeated; with triangles filled (radius 1 and up), two links in a row that a third bridges give way to
--- it. Bars that begin or end together may be told in each other's mixtures.
--- ```lua
--- for _, loop in ipairs(bars:carriers(net, { at = 2 })) do print(loop.bar, table.concat(loop.parts[1], " – ")) end
--- ```
---@param net thole.Network the network that the barcode was computed from
---@return table # a list with { bar = number of the bar, parts = lists of names } for each bar
function Barcode:carriers(net) end

--- Gives the barcode back.
--- ```lua
--- bars:close()
--- print(bars)
--- ```
function Barcode:close() end

---@class thole.Bar
---@field dim integer Its dimension: 0 for a piece, 1 for a loop.
---@field first number The first position that it is in: 1, 1.5, 2 and so on.
---@field last number The last position that it is in.
---@field kind string "closed-open", "open-closed", "closed-closed" or "open-open". Closed at its beginning: it appears as something is added, or was there from the start; open: as something is taken away. Open at its end: something added ends it; closed: something taken away does, or it is there to the last.
---@field birth thole.Time The centre of its first position.
---@field death thole.Time The centre of its last position.
---@field opens thole.Time Start of the first window that it touches.
---@field closes thole.Time Finish of the last window that it touches.
---@field lifespan number From birth to death, in the clock's unit; whole where it can be.
---@field join_only boolean True when it is in one join and in no window.
---@field index integer Its number in the barcode, from 1.
local Bar = {}

---@class thole.Output
local Output = {}

--- In a format of your own: adds to the file.
--- ```lua
--- thole.write("a.txt", bars, { format = function(_, out) out:write("bars: ", 2, "\n") end })
--- ```
---@param ... string|number what to add
---@return thole.Output # itself
function Output:write(...) end

--- Puts the file in its place. thole.write does this once the format has returned.
function Output:commit() end

--- Throws away what was written, unless it was committed. thole.write does this after an error.
function Output:close() end

local thole = { windows = {} }

--- The version of Thole, as 0.1.0.
---@type string
thole.version = nil

--- Stands in place of a default for a parameter that has none and must be given.
---@type thole.Needed
thole.needed = nil

---@class thole.ParamsOptions
---@field help? string what it means, for the list
---@field type? string one of "text", "file", "number", "integer", "boolean", "duration", "list"
---@field one_of? table list of the values allowed
---@field min? number least value
---@field max? number greatest value

--- Declares what the user of the recipe can choose on the command line, as name=value, and
--- returns the values. Each parameter is name = default, or name = { default, help = …, … } with more to
--- say; a default of thole.needed means that the user must give it, and without any default the value may
--- be nil. The type follows from the default unless told. Called once in a recipe. `thole run RECIPE help`
--- lists the parameters.
--- ```lua
--- local p = thole.params {
---     length = { "20 min", help = "length of a window" },
---     radius = { 1, min = 0 },
--- }
--- print(p.length, p.radius)
--- ```
---@param specs table parameters by name
---@return table # the values by name
function thole.params(specs) end

---@class thole.ReadContactsOptions
---@field from? string|integer column of one end: its name, or its number from 1 (default: "from")
---@field to? string|integer column of the other end (default: "to")
---@field start? string|integer column of the time a link begins (default: "start")
---@field finish? string|integer column of the time it ends; unless named, it need not be there (default: "finish")
---@field duration? string|integer column of how long it lasts, in place of finish
---@field linger? thole.Duration how long contacts last (default: 0)
---@field separator? string ",", ";" or "\t" (default: found)
---@field header? boolean false: there is no header, columns go by number (default: true)
---@field time? string "iso", "epoch" (seconds since 1970-01-01T00:00:00Z) or "plain" numbers (default: found)
---@field zone? string time zone, as "Atlantic/Azores": of times without offset, and for display (default: UTC)
---@field unit? string name of the unit of plain numbers (default: "s")
---@field faulty? string "skip" counts faulty rows by reason instead (default: "stop")
---@field columns? string[] names of the other columns to keep as attributes (default: all)

--- Reads links from a file of delimited text, a row a link, plain or compressed by gzip, zstd
--- or xz. "-" is standard input. A row without a finish is a contact: a link of one instant. A row whose
--- two ends are the same place is counted and set aside. Memory follows the network, not the file.
--- ```lua
--- thole.write("legs.csv", net)
--- local legs = thole.read_contacts("legs.csv", { zone = "Atlantic/Azores" })
--- print(#legs, table.concat(legs.columns, ", "))
--- ```
---@param path string the file, or "-"
---@param options? thole.ReadContactsOptions see below
---@return thole.Network # the links by start
function thole.read_contacts(path, options) end

---@class thole.NetworkOptions
---@field zone? string time zone of calendar times, as "Atlantic/Azores" (default: UTC)
---@field unit? string name of the unit of plain numbers (default: "s")

--- Makes a network from Lua. An event is { from, to, start, finish }, by place or by name;
--- without a finish it is a contact. Other names are attributes, numbers or texts. Without zone and unit,
--- the first start tells whether times are calendar times.
--- ```lua
--- local tides = thole.network { { "A", "B", 0, 6.2 }, { "B", "C", 3, 9.4, boats = 2 } }
--- print(#tides, tides:span())
--- ```
---@param events table[] the links
---@param options? thole.NetworkOptions see below
---@return thole.Network # the links by start
function thole.network(events, options) end

---@class thole.WriteOptions
---@field format? fun(thing: any, out: thole.Output) a format of your own: called as format(thing, out), writes with out:write
---@field view? string of an .svg: "barcode" or "diagram" (default: "barcode")
---@field dim? integer of an .svg: the dimension to show (default: all)
---@field dims? integer[] of an .svg: the dimensions to show (default: all)
---@field title? string of an .svg
---@field width? number of an .svg, in pixels (default: 1200)

--- Writes a file in the format of its suffix: .csv, .jsonl (one JSON object a line) or .svg (a
--- chart of a barcode). The file is written beside its name and renamed into place when it is whole; after
--- an error the old file stands as it was. Text is written as it is.
--- ```lua
--- thole.write("loops.txt", bars, { format = function(b, out)
---     for bar in b:each { dim = 1 } do out:write(bar.opens, " ", bar.closes, "\n") end
--- end })
--- thole.write("bars.csv", bars)
--- ```
---@param path string the file; in the host, from the folder of --out
---@param thing thole.Barcode|thole.Network|thole.Windows|table|string what to write; a table has columns (a list of names) and rows (a list of lists)
---@param options? thole.WriteOptions see below
function thole.write(path, thing, options) end

--- Writes one HTML file that holds everything it shows: it fetches nothing and runs no script.
--- A part is a table that begins with its name: { "account", net = net }, { "findings", bars =, net = }, {
--- "betti", { bars, dim = 0, label = … }, … }, { "barcode", { bars, title = … }, … }, { "diagram", { bars,
--- dim = 1, title = … }, … }, { "longest", bars =, dim =, most = 10, net = }, { "days", net =, bars = }, {
--- "method", recipe =, parameters =, net =, bars = { … } }, { "text", title =, "…" }, { "caution" }. The
--- list may have a title and a lead, the paragraph below it.
--- ```lua
--- thole.report("morning.html", { title = "A morning", { "account", net = net }, { "barcode", { bars } }, { "caution" } })
--- ```
---@param path string the file; in the host, from the folder of --out
---@param parts table the parts in their order, with title and lead
function thole.report(path, parts) end

--- Sets how many worker threads the computation uses, and tells. Results are the same for any
--- number. The host sets it from --threads; in the stock interpreter it begins at 1.
--- ```lua
--- print(thole.threads(2))
--- ```
---@param n? integer from 1 to 256; left out, nothing changes
---@return integer # the number in use
function thole.threads(n) end

--- Prints what this reference says of a name, or the list of names.
--- ```lua
--- thole.help("net:span")
--- ```
---@param name? string as "net:keep" or "sliding"
function thole.help(name) end

---@class thole.SlidingOptions
---@field length thole.Duration of each window
---@field overlap? number share of a window that the next one has too, from 0 to below 1 (default: 0)
---@field step? thole.Duration from one start to the next, in place of overlap (default: the length)
---@field start? thole.Time start of the first window (default: the links' first start)
---@field finish? thole.Time windows go on until one reaches it (default: the links' last finish)

--- Windows of one length, each starting a step after the one before. They begin at the first
--- start of the links and go on until one reaches their last finish; a contact at the very end is in a
--- window too.
--- ```lua
--- local w = thole.windows.sliding(net, { length = "20 min", overlap = 0.5 })
--- print(#w, w[2].start)
--- ```
---@param net thole.Network whose clock and span they have
---@param options thole.SlidingOptions length must be there
---@return thole.Windows # in order
function thole.windows.sliding(net, options) end

--- Windows that are listed: { start, finish, label } by place, or start =, finish =, label =
--- by name; or in a file of delimited text whose header names start, finish and perhaps label.
--- ```lua
--- local w = thole.windows.list(net, { { "2031-03-03T06:00", "2031-03-03T06:30", "early" },
---     { start = "2031-03-03T06:30", finish = "2031-03-03T07:30", label = "late" } })
--- print(#w, w[2].label)
--- ```
---@param net thole.Network whose clock they have
---@param list table[]|string the windows, or the path of a file ("-" is standard input)
---@return thole.Windows # in the order given
function thole.windows.list(net, list) end

--- Windows by a rule of your own. A function that yields start, finish and perhaps a label, with
--- coroutine.yield, gives a window each time until it ends. One that returns them is called again and again, as
--- rule(number, start and finish of the window before), until it returns nil.
--- ```lua
--- local six = 1930287600 -- 2031-03-03T06:00:00-01:00 in seconds
--- local w = thole.windows.by(net, function()
---     for hour = 0, 1 do
---         coroutine.yield(six + hour * 3600, six + hour * 3600 + 1800, "first half of hour " .. hour)
---     end
--- end)
--- print(#w, w[1].start, w[2].label)
--- ```
---@param net thole.Network whose clock they have
---@param rule fun(i: integer, start: thole.Time|nil, finish: thole.Time|nil): thole.Time|nil, thole.Time|nil, string|nil the rule
---@return thole.Windows # in the order given
function thole.windows.by(net, rule) end

return thole
