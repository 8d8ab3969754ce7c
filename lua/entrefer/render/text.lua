--- A page as plain text for the terminal.
-- @module entrefer.render.text
local write = require "entrefer.write"

local text = {}

local width = 100

-- Wraps a paragraph, with a prefix on every line.
local function wrap(paragraph, prefix)
  local lines, line = {}, prefix
  for word in paragraph:gmatch("%S+") do
    if #line + #word + 1 > width and line ~= prefix then
      lines[#lines + 1], line = line, prefix
    end
    line = line .. (line == prefix and "" or " ") .. word
  end
  lines[#lines + 1] = line
  return table.concat(lines, "\n")
end

local function plain(paragraph)
  return (paragraph:gsub("%*%*(.-)%*%*", "%1"):gsub("`(.-)`", "%1"))
end

local writers = {
  heading = function(item)
    return "\n" .. item.text .. "\n" .. ("-"):rep(utf8.len(item.text) or #item.text)
  end,
  prose = function(item) return wrap(plain(item.text), "") end,
  value = function(item)
    return ("  %-38s %s%s"):format(item.label, item.text, item.note and "  (" .. item.note .. ")" or "")
  end,
  caution = function(item) return wrap(plain(item.text), "CAUTION  ") end,
  table = function(item)
    return (item.caption and item.caption .. "\n" or "")
      .. write.table { columns = item.columns, rows = item.rows }:text()
  end,
  plot = function(item)
    return ("[plot %s: %s]"):format(item.name, item.spec.alt or item.spec.title)
  end,
  drawing = function(item) return ("[drawing %s: %s]"):format(item.name, item.picture.title) end,
}

--- Renders a page.
-- @tparam page page
-- @treturn string
function text.render(page)
  local parts = { page.title, "\n", ("="):rep(utf8.len(page.title) or #page.title) }
  for _, item in ipairs(page.items) do
    parts[#parts + 1] = "\n" .. writers[item.kind](item):gsub("\n+$", "")
  end
  return table.concat(parts) .. "\n"
end

return text
