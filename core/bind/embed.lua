-- Print a C file that holds the Lua files named on the command line, for lua_half.h.
--
-- Left out are files that nobody loads: those that begin with "---@meta" are for editors, those that
-- begin with "#!" are programs of their own.

local ROOT = "lua/"

local function read(path)
    local file = assert(io.open(path, "rb"))
    local text = file:read("a")
    file:close()
    return text
end

local names, sizes = {}, {}

print('#include "bind/lua_half.h"\n')
for _, path in ipairs(arg) do
    local text = read(path)
    if not text:find("^%-%-%-@meta") and not text:find("^#!") then
        assert(path:sub(1, #ROOT) == ROOT, path .. " is not under " .. ROOT)
        local name = path:sub(#ROOT + 1)
        -- A file that does not compile stops the build here, not the user later.
        assert(load(text, "@" .. name, "t"))
        names[#names + 1], sizes[#sizes + 1] = name, #text
        print(("static const unsigned char file_%d[] = {"):format(#names))
        for from = 1, #text, 24 do
            print(table.concat({ text:byte(from, math.min(from + 23, #text)) }, ",") .. ",")
        end
        print("0};\n")
    end
end

print("const tl_file tl_lua_half[] = {")
for i, name in ipairs(names) do
    print(('    {"%s", file_%d, %d},'):format(name, i, sizes[i]))
end
print("};\n")
print(("const size_t tl_lua_half_count = %d;"):format(#names))
