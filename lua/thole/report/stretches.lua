-- How long something held: totals and stretches over the shares of time that windows stand for
-- (moments.shares).

local stretches = {}

-- holds: function(i) for window i. Returns the total on the axis, and the longest unbroken stretch as
-- { left, right } (the first of equally long ones), or nil when it never held.
function stretches.measure(shares, holds)
    local total, best, current = 0, nil, nil
    for i, share in ipairs(shares) do
        if holds(i) then
            total = total + share[2] - share[1]
            if current and share[1] <= current[2] then
                current[2] = share[2]
            else
                current = { share[1], share[2] }
            end
            if not best or current[2] - current[1] > best[2] - best[1] then
                best = { current[1], current[2] }
            end
        else
            current = nil
        end
    end
    return total, best
end

-- The part of each share that lies in [left, right), summed where `holds`.
function stretches.within(shares, left, right, holds)
    local total = 0
    for i, share in ipairs(shares) do
        if share[2] > left and share[1] < right and holds(i) then
            total = total + math.min(share[2], right) - math.max(share[1], left)
        end
    end
    return total
end

return stretches
