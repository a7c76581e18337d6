-- Every function of the public headers has its documentation: a comment right before it, or before the group of
-- declarations that it stands in without a blank line, or on its own line.

package.path = "tests/lint/support/?.lua;" .. package.path
local rule = require "rule"

-- base.h says once for all of them what these do.
local HOUSE = { "_retain%(", "_release%(" }

local function check(path, text, fault)
    if not path:find("^core/%l+/.*%.h$") then return end
    local documented, inside = false, false
    for number, line in rule.lines(text) do
        if line:find("^%s*/%*") then documented = not line:find("^/%* %-%-%-%-") end -- "---- part ----" is a heading
        if line:find("^%s*$") and not inside then documented = false end
        local name = line:match("^THOLE_API.-(thole_[%w_]+)%(")
        local house = false
        for _, pattern in ipairs(HOUSE) do house = house or line:find(pattern) ~= nil end
        if line:find("^THOLE_API") and not documented and not house and not line:find("/%*") then
            fault(number, "%s is not documented", name or line)
        end
        if line:find("/%*") then inside = true end
        if line:find("%*/") then inside = false end
    end
end

local headers = {}
for header in io.open("core/thole.h"):read("a"):gmatch('#include "([%w/_]+%.h)"') do headers[#headers + 1] = "core/" .. header end

rule.run {
    check = check, files = headers, least = 9,
    wrong = {
        { "core/base/x.h", "/* About f. */\n\nTHOLE_API int thole_f(int a);\n", "thole_f is not documented" },
        { "core/base/x.h", "/* ---- doing ---- */\nTHOLE_API int thole_f(int a);\n", "thole_f is not documented" },
        { "core/base/x.h", "THOLE_API int thole_count(int a);\n", "thole_count is not documented" },
    },
    right = {
        { "core/base/x.h", "/* About both.\n *\n\n * a: of them */\nTHOLE_API int thole_f(int a);\nTHOLE_API int thole_g(void);\n" },
        { "core/base/x.h", "THOLE_API int thole_f(int a); /* doubles it */\nTHOLE_API void thole_f_release(int a);\n" },
    },
}
