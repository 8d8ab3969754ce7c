std = "lua54"
max_line_length = 110
files["tests"] = { std = "+busted" }
