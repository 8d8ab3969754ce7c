--- The page a recipe writes its story on: headings, prose, values, tables, plots, drawings, cautions, in
-- order. A page is plain data, so it can leave the state in which a recipe ran; it is checked again
-- when it is read back (`page.from`), and rendered by `entrefer.render.*`.
-- @module entrefer.page
local drawing = require "entrefer.drawing"
local fail = require "entrefer.fail"
local html = require "entrefer.render.html"
local markdown = require "entrefer.render.markdown"
local plot = require "entrefer.plot"
local quantity = require "entrefer.quantity"
local svg = require "entrefer.svg"
local text = require "entrefer.render.text"
local write = require "entrefer.write"

local page = {}
page.__index = page

--- A new, empty page.
-- @string title
function page.new(title)
  return setmetatable({ title = tostring(title), items = {}, names = {} }, page)
end

local function add(self, item)
  self.items[#self.items + 1] = item
end

local function words(value, field)
  if type(value) ~= "string" then fail(field, value, "text") end
  return value
end

-- The page's own files.
local reserved = { report = true, results = true, provenance = true }

-- Names become files, so they are short and plain, and none is used twice.
local function take_name(self, name)
  if type(name) ~= "string" or not name:match("^[%w_-]+$") or #name > 64 then
    fail("page name", name, "at most 64 letters, digits, - and _")
  end
  if self.names[name] or reserved[name] then
    fail("page name", name, "a name not used before on the page")
  end
  self.names[name] = true
  return name
end

--- Gives the page another title: that of the project rather than of the recipe.
function page:retitle(title) self.title = words(title, "page title") end

--- A heading.
function page:heading(heading) add(self, { kind = "heading", text = words(heading, "heading") }) end

--- A paragraph. `**words**` are set off; `` `words` `` are code.
function page:prose(paragraph) add(self, { kind = "prose", text = words(paragraph, "prose") }) end

--- One quantity with its label; `note` stands behind it.
-- @string label
-- @param value number in SI units with `unit`, else text or a number shown as it is
-- @string[opt] unit
-- @string[opt] note
function page:value(label, value, unit, note)
  add(self, { kind = "value", label = words(label, "value label"), note = note,
    text = unit and quantity.format(value, unit, 4, { ascii = true }) or tostring(value) })
end

--- A caution, set off from the rest.
function page:caution(caution) add(self, { kind = "caution", text = words(caution, "caution") }) end

--- A table that also becomes the files NAME.csv, NAME.json, NAME.md and NAME.txt.
-- @string name for the files
-- @tparam table spec `{ columns, rows }` as `entrefer.write` takes them
-- @string[opt] caption
function page:table(name, spec, caption)
  local made = write.table(spec)
  add(self, { kind = "table", name = take_name(self, name), columns = made.columns,
    rows = made.rows, caption = caption })
end

--- A plot (see `entrefer.plot`) that also becomes the file NAME.svg.
-- @string name for the file
-- @tparam table spec `{ title, x, y, series, alt }`
function page:plot(name, spec)
  plot.check(spec)
  add(self, { kind = "plot", name = take_name(self, name), spec = spec })
end

--- The section of a part to scale, with its sensor; also the file NAME.svg. A custom core has no shape
-- to draw: then nothing is added.
-- @string name for the file
-- @tparam part part
-- @tparam[opt] probe probe
-- @string[opt] caption
function page:drawing(name, part, probe, caption)
  local picture = drawing.section(part, probe)
  if not picture then return end
  add(self, { kind = "drawing", name = take_name(self, name), picture = picture,
    caption = caption })
end

--- The page as plain data.
-- @treturn table `{ title, items }`
function page:plain()
  return { title = self.title, items = self.items }
end

local readers = {
  heading = function(self, item) self:heading(item.text) end,
  prose = function(self, item) self:prose(item.text) end,
  caution = function(self, item) self:caution(item.text) end,
  value = function(self, item)
    add(self, { kind = "value", label = words(item.label, "value label"),
      text = words(item.text, "value"), note = item.note })
  end,
  table = function(self, item)
    self:table(item.name, { columns = item.columns, rows = item.rows }, item.caption)
  end,
  plot = function(self, item) self:plot(item.name, item.spec) end,
  drawing = function(self, item)
    svg.write(item.picture) -- refuses what is no picture
    add(self, { kind = "drawing", name = take_name(self, item.name), picture = item.picture,
      caption = item.caption })
  end,
}

--- Reads a page back from plain data, checking every item.
-- @tparam table data from `page:plain`
-- @treturn page
-- @raise an error table for what a page doesn't hold
function page.from(data)
  local self = page.new(words(data.title, "page title"))
  for i, item in ipairs(data.items) do
    local reader = readers[item.kind]
    if not reader then fail("page item " .. i, item.kind, "a kind of item that a page holds") end
    for _, field in ipairs { "note", "caption" } do
      if item[field] ~= nil then words(item[field], "page " .. field) end
    end
    reader(self, item)
  end
  return self
end

--- The page as plain text for the terminal.
function page:text() return text.render(self) end

--- The page as Markdown; pictures are referred to as files beside it.
function page:markdown() return markdown.render(self) end

--- The page as one self-contained HTML file.
-- @tparam table pictures SVG text by name, from `page:pictures`
-- @string[opt] why plots are missing from them
function page:html(pictures, why) return html.render(self, pictures, why) end

--- SVG text of all plots and drawings, by name. All plots are drawn by one process.
-- @treturn table
-- @treturn string|nil why plots are missing from it
function page:pictures()
  local pictures, plots, names = {}, {}, {}
  for _, item in ipairs(self.items) do
    if item.kind == "plot" then
      plots[#plots + 1], names[#names + 1] = item.spec, item.name
    elseif item.kind == "drawing" then
      pictures[item.name] = svg.write(item.picture)
    end
  end
  local drawn, why = plot.render(plots)
  for i, picture in ipairs(drawn) do pictures[names[i]] = picture end
  return pictures, why
end

local function table_files(item, files)
  local made = write.table { columns = item.columns, rows = item.rows }
  for _, kind in ipairs { { "txt", "text" }, { "md", "markdown" }, { "csv", "csv" },
    { "json", "json" } } do
    files[#files + 1] = { item.name .. "." .. kind[1], made[kind[2]](made) }
  end
end

--- Writes the page (text, Markdown, HTML), its tables and pictures into a folder. Everything is rendered
-- before the first file is written.
-- @string folder
-- @treturn table list of the files written
function page:save(folder)
  local pictures, why = self:pictures()
  local files = { { "report.txt", self:text() }, { "report.md", self:markdown() },
    { "report.html", self:html(pictures, why) } }
  for _, item in ipairs(self.items) do
    if item.kind == "table" then table_files(item, files) end
    if pictures[item.name] then files[#files + 1] = { item.name .. ".svg", pictures[item.name] } end
  end
  local written = {}
  for i, file in ipairs(files) do
    written[i] = folder .. "/" .. file[1]
    write.file(written[i], file[2])
  end
  return written
end

return page
