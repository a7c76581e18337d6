-- { "findings", bars = bars, net = net }: what stands out, figures first. `bars` needs dimensions 0
-- and 1; time is counted as the curves show it, each moment with the window whose centre is nearest.

local axis = require "thole.svg_axis"
local escape = require "thole.escape"
local moments = require "thole.moments"
local page = require "thole.report.page"
local stretches = require "thole.report.stretches"

local function percent(part, whole)
    local share = 100 * part / whole
    if share > 0 and share < 1 then return "under 1 %" end
    if share > 99 and share < 100 then return "over 99 %" end
    return ("%d %%"):format(math.floor(share + 0.5))
end

local function most(numbers)
    local best, at = 0, 1
    for i, n in ipairs(numbers) do
        if n > best then best, at = n, i end
    end
    return best, at
end

-- The facts that a report and a program may want: see the fields set below.
local function gather(bars)
    local found = { axis = axis.over(bars.windows, bars.zone, bars.unit),
            shares = moments.shares(bars.windows) }
    local pieces, loops = bars:betti(0), bars:betti(1)
    found.span = stretches.measure(found.shares, function() return true end)
    found.whole, found.whole_stretch = stretches.measure(found.shares, function(i) return pieces[i] == 1 end)
    found.parted = stretches.measure(found.shares, function(i) return pieces[i] > 1 end)
    found.empty, found.empty_stretch = stretches.measure(found.shares, function(i) return pieces[i] == 0 end)
    found.most_pieces, found.most_pieces_at = most(pieces)
    found.most_loops, found.most_loops_at = most(loops)
    for bar in bars:each { dim = 1, longest = 1 } do
        found.longest = { lifespan = bar.lifespan, opens = bar.opens, closes = bar.closes }
    end
    return found
end

return function(part)
    local bars = part.bars
    axis.check_dim(bars, 0)
    axis.check_dim(bars, 1)
    local f = gather(bars)
    local unit = not f.axis.calendar and (bars.unit or "") or nil
    local function lasting(x) return moments.duration(x, unit) end
    local function stretch(s)
        return ("%s, from %s to %s"):format(lasting(s[2] - s[1]), f.axis:name(s[1]), f.axis:name(s[2]))
    end
    local function window(i)
        local w = bars.windows[i]
        return ("the window from %s to %s"):format(moments.name(w.start), moments.name(w.finish))
    end

    local figures, sentences = {}, {}
    local function figure(value, words) figures[#figures + 1] = { value, words } end
    local function say(figures_first, rest)
        sentences[#sentences + 1] = "<strong>" .. page.text(figures_first) .. "</strong> " .. page.text(rest)
    end

    figure(lasting(f.whole),
            ("in one piece, of the %s from the first window to the last (%s)"):format(lasting(f.span),
            percent(f.whole, f.span)))
    figure(lasting(f.empty), ("without any link (%s)"):format(percent(f.empty, f.span)))
    figure(escape.count(f.most_pieces), "pieces at once, at most")
    figure(escape.count(f.most_loops), "loops at once, at most")

    if f.whole_stretch then
        say(lasting(f.whole) .. ":",
                ("the network was in one piece for that long. The longest unbroken stretch was %s.")
                :format(stretch(f.whole_stretch)))
    else
        say("Never", "was the network in one piece.")
    end
    if f.parted > 0 then
        say(lasting(f.parted) .. ":",
                ("it was in two pieces or more. %s at once was the most, first in %s."):format(
                escape.count(f.most_pieces), window(f.most_pieces_at)))
    end
    if f.empty_stretch then
        say(lasting(f.empty) .. ":",
                ("nothing was under way. The longest such pause was %s."):format(stretch(f.empty_stretch)))
    end
    if f.most_loops > 0 then
        say(escape.count(f.most_loops) .. (f.most_loops == 1 and " loop" or " loops"),
                ("at once was the most (radius %s), first in %s."):format(tostring(bars.radius),
                        window(f.most_loops_at)))
    end
    if f.longest then
        say(lasting(f.longest.lifespan) .. ":",
                ("the loop that lasted longest; it opens %s and closes %s."):format(
                moments.name(f.longest.opens), moments.name(f.longest.closes)))
    end

    local out = { '<ul class="figures">\n' }
    for _, item in ipairs(figures) do
        out[#out + 1] = ("<li><strong>%s</strong> <span>%s</span></li>\n"):format(page.text(item[1]),
                page.text(item[2]))
    end
    out[#out + 1] = '</ul>\n<ul class="findings">\n'
    for _, sentence in ipairs(sentences) do out[#out + 1] = "<li>" .. sentence .. "</li>\n" end
    out[#out + 1] = '</ul>\n<p class="note">A place counts in a window only while one of its links is '
        .. 'active, so ' ..
        "pieces are pieces of what runs. A loop is a way round that comes back to its beginning by other "
        .. "links.</p>\n"
    return "What stands out", table.concat(out)
end
