-- C as the rules read it: comments and what stands in quotes become blanks, lines stay where they were.

local c_text = {}

local function blank(text) return (text:gsub("[^\n]", " ")) end

function c_text.bare(text)
    local out, at = {}, 1
    while true do
        local open = text:find("[/\"']", at)
        if not open then break end
        local two, stop = text:sub(open, open + 1)
        if two == "/*" then
            stop = select(2, text:find("*/", open + 2, true)) or #text
        elseif two == "//" then
            stop = (text:find("\n", open, true) or #text + 1) - 1
        elseif two:sub(1, 1) ~= "/" then
            local quote = two:sub(1, 1)
            stop = open + 1
            while stop <= #text and text:sub(stop, stop) ~= quote and text:sub(stop, stop) ~= "\n" do
                stop = stop + (text:sub(stop, stop) == "\\" and 2 or 1)
            end
        end
        out[#out + 1] = text:sub(at, open - 1)
        out[#out + 1] = stop and blank(text:sub(open, stop)) or "/"
        at = (stop or open) + 1
    end
    out[#out + 1] = text:sub(at)
    return table.concat(out)
end

-- Functions of bare C: { line, last, body }, body being what stands between its braces.
function c_text.functions(bare)
    local list, depth, open, line, at = {}, 0, nil, 1, 1
    local before = "" -- what stands at the top level since the last ; or }
    for text, sign in bare:gmatch("([^{};\n]*)([{};\n])") do
        if depth == 0 then before = before .. text .. (sign == "\n" and " " or "") end
        at = at + #text
        if sign == "{" then
            if depth == 0 and before:find("%)%s*$") and not before:find("=") then open = { line = line, from = at + 1 } end
            depth = depth + 1
        elseif sign == "}" then
            depth = depth - 1
            if depth == 0 and open then
                list[#list + 1] = { line = open.line, last = line, body = bare:sub(open.from, at - 1) }
                open = nil
            end
            if depth == 0 then before = "" end
        elseif sign == ";" and depth == 0 then
            before = ""
        elseif sign == "\n" then
            line = line + 1
            if depth == 0 and before:find("^%s*#") then before = "" end -- a line of the preprocessor
        end
        at = at + 1
    end
    return list
end

return c_text
