--- The page a recipe writes its story on: headings, prose, values, tables, cautions, in order.
-- Rendered to plain text for the terminal and to Markdown; its tables also become files.
-- @module entrefer.page
local fail = require "entrefer.fail"
local quantity = require "entrefer.quantity"
local write = require "entrefer.write"

local page = {}
page.__index = page

--- A new, empty page.
-- @string title
function page.new(title)
  return setmetatable({ title = title, items = {}, tables = {} }, page)
end

local function add(self, item)
  self.items[#self.items + 1] = item
end

--- A heading.
function page:heading(text) add(self, { kind = "heading", text = text }) end

--- A paragraph.
function page:prose(text) add(self, { kind = "prose", text = text }) end

--- One quantity with its label; `note` stands behind it.
function page:value(label, value, unit, note)
  add(self, { kind = "value", label = label, note = note,
    text = unit and quantity.format(value, unit, 4, { ascii = true }) or tostring(value) })
end

--- A caution, set off from the rest.
function page:caution(text) add(self, { kind = "caution", text = text }) end

--- A table that also becomes the files NAME.csv, NAME.json, NAME.md and NAME.txt.
-- @string name for the files: letters, digits, "-" and "_"
-- @tparam table spec `{ columns, rows }` as `entrefer.write` takes them
-- @string[opt] caption
function page:table(name, spec, caption)
  if type(name) ~= "string" or not name:match("^[%w_-]+$") then
    fail("table name", name, "letters, digits, - and _")
  end
  if self.tables[name] then fail("table name", name, "a name not used before on the page") end
  local made = write.table(spec)
  self.tables[name] = made
  add(self, { kind = "table", name = name, table = made, caption = caption })
end

-- Wraps a paragraph to a width, with a prefix on every line.
local function wrap(text, width, prefix)
  local lines, line = {}, prefix
  for word in text:gmatch("%S+") do
    if #line + #word + 1 > width and line ~= prefix then
      lines[#lines + 1], line = line, prefix
    end
    line = line .. (line == prefix and "" or " ") .. word
  end
  lines[#lines + 1] = line
  return table.concat(lines, "\n")
end

local function value_lines(item)
  return ("  %-38s %s%s"):format(item.label, item.text, item.note and "  (" .. item.note .. ")" or "")
end

local as_text = {
  heading = function(item) return "\n" .. item.text .. "\n" .. ("-"):rep(#item.text) end,
  prose = function(item) return wrap(item.text, 100, "") end,
  value = value_lines,
  caution = function(item) return wrap(item.text, 100, "CAUTION  ") end,
  table = function(item)
    return (item.caption and item.caption .. "\n" or "") .. item.table:text()
  end,
}

local as_markdown = {
  heading = function(item) return "## " .. item.text end,
  prose = function(item) return item.text end,
  value = function(item)
    return ("- %s: **%s**%s"):format(item.label, item.text,
      item.note and " (" .. item.note .. ")" or "")
  end,
  caution = function(item) return "> **Caution.** " .. item.text end,
  table = function(item)
    return (item.caption and "*" .. item.caption .. "*\n\n" or "") .. item.table:markdown()
  end,
}

local function render(self, first, by_kind, separator)
  local parts, before = { first }, nil
  for _, item in ipairs(self.items) do
    -- Values stand close together, everything else has air around it.
    local gap = item.kind == "value" and before == "value" and "\n" or separator
    parts[#parts + 1] = gap .. by_kind[item.kind](item):gsub("\n+$", "")
    before = item.kind
  end
  return table.concat(parts) .. "\n"
end

--- The page as plain text.
function page:text()
  return render(self, self.title .. "\n" .. ("="):rep(#self.title), as_text, "\n")
end

--- The page as Markdown.
function page:markdown()
  return render(self, "# " .. self.title, as_markdown, "\n\n")
end

--- Writes the page and its tables below a folder, which is made when it isn't there.
-- @string folder
-- @treturn table list of the files written
function page:save(folder)
  local files = { { "report.txt", self:text() }, { "report.md", self:markdown() } }
  local names = {}
  for name in pairs(self.tables) do names[#names + 1] = name end
  table.sort(names)
  for _, name in ipairs(names) do
    local made = self.tables[name]
    files[#files + 1] = { name .. ".txt", made:text() }
    files[#files + 1] = { name .. ".md", made:markdown() }
    files[#files + 1] = { name .. ".csv", made:csv() }
    files[#files + 1] = { name .. ".json", made:json() }
  end
  local written = {}
  for i, file in ipairs(files) do
    written[i] = folder .. "/" .. file[1]
    write.file(written[i], file[2])
  end
  return written
end

return page
