--- The known name nearest to a misspelt one, for messages that refuse a name.
--
-- Distance: letters put in, left out, replaced, or two neighbours swapped (optimal string alignment;
-- Damerau, "A technique for computer detection and correction of spelling errors", CACM 7, 1964).

local nearest = {}

local LONGEST = 64 -- bytes; longer words are not misspelt names

--- Edit distance of two words, in bytes.
function nearest.distance(a, b)
    local above, row = {}, {} -- the rows for i - 2 and i - 1 letters of a
    for j = 0, #b do
        row[j] = j
    end
    for i = 1, #a do
        local next_row = { [0] = i }
        local letter = a:byte(i)
        for j = 1, #b do
            local other = b:byte(j)
            local cost = math.min(row[j] + 1, next_row[j - 1] + 1, row[j - 1] + (letter == other and 0 or 1))
            if i > 1 and j > 1 and letter == b:byte(j - 1) and a:byte(i - 1) == other then
                cost = math.min(cost, above[j - 2] + 1)
            end
            next_row[j] = cost
        end
        above, row = row, next_row
    end
    return row[#b]
end

--- The name of the list `names` nearest to `word`, or nil when none is near: one slip for each
-- three letters is allowed, and a longer name that begins with the word is near. Capitals, "-"
-- and "_" do not count. The first of equally near ones is taken.
function nearest.name(word, names)
    if type(word) ~= "string" or #word > LONGEST then
        return nil
    end
    local function plain(text)
        return (text:lower():gsub("[-_ ]", ""))
    end
    local wanted = plain(word)
    local allowed = math.max(1, #wanted // 3)
    local best, best_distance
    for _, name in ipairs(names) do
        if type(name) == "string" and #name <= LONGEST then
            local known = plain(name)
            local distance = nearest.distance(wanted, known)
            if #wanted >= 2 and #known > #wanted and known:sub(1, #wanted) == wanted then
                distance = math.min(distance, allowed)
            end
            -- A word all of whose letters are replaced is another word.
            if distance <= allowed and distance < math.max(#wanted, #known)
                and (best == nil or distance < best_distance) then
                best, best_distance = name, distance
            end
        end
    end
    return best
end

--- The second half of a message that refuses `word`: 'did you mean "start"?', or 'known are …' with
-- all names, or nil when there are no names at all.
function nearest.hint(word, names)
    local name = nearest.name(word, names)
    if name then
        return ('did you mean "%s"?'):format(name)
    elseif #names > 0 then
        return "known are " .. table.concat(names, ", ")
    end
    return nil
end

return nearest
