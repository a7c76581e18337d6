-- Pieces of HTML that several parts of a report need.

local escape = require "thole.escape"

local page = {}

page.text = escape.xml

-- A name from the data: its own direction must not disturb the sentence around it.
function page.name(text)
    return "<bdi>" .. escape.xml(text) .. "</bdi>"
end

function page.section(id, title, body)
    return ('<section id="%s">\n<h2>%s</h2>\n%s</section>\n'):format(id, escape.xml(title), body)
end

function page.paragraph(text)
    return "<p>" .. escape.xml(text) .. "</p>\n"
end

function page.figure(drawing, title, caption)
    return ("<figure>\n%s%s<figcaption>%s</figcaption>\n</figure>\n"):format(
        title and ("<h3>" .. escape.xml(title) .. "</h3>\n") or "", drawing, escape.xml(caption))
end

-- Terms and what they are: list of { term, HTML }.
function page.facts(list)
    local out = { '<dl class="facts">\n' }
    for _, fact in ipairs(list) do
        out[#out + 1] = ("<dt>%s</dt><dd>%s</dd>\n"):format(escape.xml(fact[1]), fact[2])
    end
    return table.concat(out) .. "</dl>\n"
end

-- A table below the words that explain it. columns: list of { label, number = true, whole = true: a line of
-- its own on a phone }; the first column heads its row. rows: lists of HTML.
function page.table(words, columns, rows)
    local numbers = 0
    for _, column in ipairs(columns) do numbers = numbers + (column.number and 1 or 0) end
    local out = { '<p class="note">', escape.xml(words), '</p>\n<table class="stack',
        numbers * 2 > #columns and " tight" or "", '">\n<thead><tr>' }
    for _, column in ipairs(columns) do
        out[#out + 1] = ('<th scope="col"%s>%s</th>'):format(column.number and ' class="number"' or "",
                escape.xml(column[1]))
    end
    out[#out + 1] = "</tr></thead>\n<tbody>\n"
    for _, row in ipairs(rows) do
        out[#out + 1] = "<tr>"
        for i, column in ipairs(columns) do
            local class = (column.number and "number" or "") .. (column.whole and " whole" or "")
            class = class ~= "" and (' class="%s"'):format(class:match("^%s*(.*)$")) or ""
            if i == 1 then
                out[#out + 1] = ('<th scope="row"%s>%s</th>'):format(class, row[i])
            else
                out[#out + 1] = ('<td%s data-label="%s">%s</td>'):format(class, escape.xml(column[1]), row[i])
            end
        end
        out[#out + 1] = "</tr>\n"
    end
    return table.concat(out) .. "</tbody>\n</table>\n"
end

-- The whole document. sections: list of { id =, title =, html = }.
function page.document(title, lead, sections, footer)
    local out = {
        '<!DOCTYPE html>\n<html lang="en">\n<head>\n<meta charset="utf-8">\n',
        '<meta name="viewport" content="width=device-width, initial-scale=1">\n',
        '<meta name="color-scheme" content="light dark">\n',
        -- Nothing is fetched and nothing runs, whatever the data hold.
        '<meta http-equiv="Content-Security-Policy" content="default-src \'none\'; style-src '
        .. '\'unsafe-inline\'">\n',
        "<title>", escape.xml(title), "</title>\n<style>\n", require("thole.report.style")(),
                "</style>\n</head>\n<body>\n",
        "<header>\n<h1>", escape.xml(title), "</h1>\n",
        lead and ('<p class="lead">%s</p>\n'):format(escape.xml(lead)) or "",
        '<nav aria-label="Contents"><ul>\n',
    }
    for _, section in ipairs(sections) do
        out[#out + 1] = ('<li><a href="#%s">%s</a></li>\n'):format(section.id, escape.xml(section.title))
    end
    out[#out + 1] = "</ul></nav>\n</header>\n<main>\n"
    for _, section in ipairs(sections) do
        out[#out + 1] = page.section(section.id, section.title, section.html)
    end
    out[#out + 1] = ("</main>\n<footer>%s</footer>\n</body>\n</html>\n"):format(escape.xml(footer))
    return table.concat(out)
end

return page
