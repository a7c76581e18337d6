std = "lua54"
max_line_length = 140
exclude_files = { "lua/thole/library" }
