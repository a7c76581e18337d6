-- { "caution", "more words" }: what the report is not.

local page = require "thole.report.page"

local WORDS = {
    "This is a picture of the log that was read: of a timetable, not of what sails. It does not know of "
    .. "delays, " ..
        "cancellations, weather, full boats, or how far the walk is from one quay to the next.",
    "Do not decide by it alone on closing a crossing, on switching a line or a service, or on anything "
    .. "that touches " ..
        "people's safety. There, the rules and codes in force where you are come first, and the judgement "
        .. "of people " ..
        "licensed for the work.",
}

return function(part)
    local out = { '<div class="caution">\n' }
    for _, words in ipairs(WORDS) do out[#out + 1] = page.paragraph(words) end
    for i = 2, #part do out[#out + 1] = page.paragraph(part[i]) end
    return "A caution", table.concat(out) .. "</div>\n"
end
