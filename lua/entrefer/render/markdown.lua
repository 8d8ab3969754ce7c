--- A page as Markdown.
-- @module entrefer.render.markdown
local write = require "entrefer.write"

local markdown = {}

-- Text from a recipe keeps its words: what would turn into markup or HTML is escaped, `**` and back
-- quotes are the page's own markup and stay.
local function escape(text)
  return (text:gsub("[<\\]", "\\%0"):gsub("^([#>+-])", "\\%1"):gsub("%](%s*[%(%[])", "\\]%1"))
end

local writers = {
  heading = function(item) return "## " .. escape(item.text) end,
  prose = function(item) return escape(item.text) end,
  value = function(item)
    return ("- %s: **%s**%s"):format(escape(item.label), escape(item.text),
      item.note and " (" .. escape(item.note) .. ")" or "")
  end,
  caution = function(item) return "> **Caution.** " .. escape(item.text) end,
  table = function(item)
    return (item.caption and "*" .. escape(item.caption) .. "*\n\n" or "")
      .. write.table { columns = item.columns, rows = item.rows }:markdown()
  end,
  plot = function(item)
    return ("![%s](%s.svg)"):format(escape(item.spec.alt or item.spec.title), item.name)
  end,
  drawing = function(item)
    return ("![%s](%s.svg)"):format(escape(item.picture.title), item.name)
      .. (item.caption and "\n\n*" .. escape(item.caption) .. "*" or "")
  end,
}

--- Renders a page.
-- @tparam page page
-- @treturn string
function markdown.render(page)
  local parts, before = { "# " .. escape(page.title) }, nil
  for _, item in ipairs(page.items) do
    -- Values form one list.
    local gap = item.kind == "value" and before == "value" and "\n" or "\n\n"
    parts[#parts + 1] = gap .. writers[item.kind](item):gsub("\n+$", "")
    before = item.kind
  end
  return table.concat(parts) .. "\n"
end

return markdown
