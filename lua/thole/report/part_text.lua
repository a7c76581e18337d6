-- { "text", title = "…", "a paragraph", "another" }: words of the recipe's own.

local page = require "thole.report.page"

return function(part)
    local out = {}
    for i = 2, #part do out[#out + 1] = page.paragraph(part[i]) end
    return "About", table.concat(out)
end
