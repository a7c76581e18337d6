std = "lua54"
max_line_length = 190
ignore = { "411", "421", "431" } -- names used again in a smaller scope
exclude_files = { "lua/thole/library" }
-- The host narrows what recipes see: it writes to fields of the standard tables on purpose.
files["lua/thole/command.lua"] = { ignore = { "122" } }
files["lua/thole/confine.lua"] = { ignore = { "122" } }
