--- A page as one self-contained HTML file: no network, no script, light and dark, printable.
-- @module entrefer.render.html
local number = require "entrefer.number"
local svg = require "entrefer.svg"

local html = {}

local escape = svg.escape

local style = [[
:root { color-scheme: light dark; --ink: #1b1f24; --paper: #fff; --line: #c8ced6; --soft: #f3f5f8;
  --caution: #8a5200; --caution-paper: #fff6e5; --fail: #a61b1b; }
@media (prefers-color-scheme: dark) { :root { --ink: #e6e9ee; --paper: #16191d; --line: #3d444d;
  --soft: #21262d; --caution: #ffc46b; --caution-paper: #33270f; --fail: #ff8f8f; } }
body { font: 16px/1.5 system-ui, sans-serif; color: var(--ink); background: var(--paper);
  max-width: 60rem; margin: 0 auto; padding: 1.5rem; }
h1 { font-size: 1.7rem; line-height: 1.2; } h2 { font-size: 1.25rem; margin: 2rem 0 .6rem;
  border-bottom: 1px solid var(--line); padding-bottom: .2rem; }
nav { background: var(--soft); padding: .6rem 1rem; border-radius: .4rem; }
nav ul { margin: .2rem 0; padding-left: 1.2rem; } nav a { color: inherit; }
dl.values { display: grid; grid-template-columns: minmax(12rem, 20rem) 1fr; gap: .2rem 1rem;
  margin: .8rem 0; }
dl.values dt { color: var(--ink); opacity: .8; } dl.values dd { margin: 0; font-weight: 600; }
dl.values small { font-weight: 400; opacity: .8; }
.scroll { overflow-x: auto; } table { border-collapse: collapse; font-size: .9rem; margin: .8rem 0; }
caption { text-align: left; font-style: italic; padding: .2rem 0; }
th, td { border: 1px solid var(--line); padding: .25rem .5rem; vertical-align: top; text-align: left; }
th { background: var(--soft); } td.n, th.n { text-align: right; font-variant-numeric: tabular-nums; }
td.fail { color: var(--fail); font-weight: 700; }
.caution { border-left: .3rem solid var(--caution); background: var(--caution-paper);
  padding: .5rem .8rem; margin: .6rem 0; }
.caution strong { color: var(--caution); }
figure { margin: 1rem 0; } figure svg { width: 100%; max-width: 46rem; height: auto; background: #fff;
  border: 1px solid var(--line); border-radius: .3rem; }
figcaption { font-size: .9rem; opacity: .85; } details { margin: .3rem 0; font-size: .9rem; }
footer { margin-top: 2.5rem; font-size: .85rem; opacity: .8; border-top: 1px solid var(--line); }
@media print { body { max-width: none; padding: 0; font-size: 10.5pt; } nav, details { display: none; }
  h2 { break-after: avoid; } figure, tr, .caution { break-inside: avoid; } .scroll { overflow: visible; }
  table { font-size: 8pt; } }
@page { margin: 16mm; }
]]

local function inline(text)
  return (escape(text):gsub("%*%*(.-)%*%*", "<strong>%1</strong>"):gsub("`(.-)`", "<code>%1</code>"))
end

local function heading_of(column)
  if column.unit and column.unit ~= "1" then return ("%s [%s]"):format(column.name, column.unit) end
  return column.name
end

local function cell(value, column)
  if value == nil then return "<td></td>" end
  if type(value) == "number" then
    local text = column.digits == 0 and number.fixed(value, 0)
      or number.significant(value, column.digits or 4)
    return ('<td class="n">%s</td>'):format(text)
  end
  return ("<td%s>%s</td>"):format(value == "FAIL" and ' class="fail"' or "", escape(value))
end

local function table_html(columns, rows, caption)
  local parts = { '<div class="scroll"><table>' }
  if caption then parts[#parts + 1] = "<caption>" .. inline(caption) .. "</caption>" end
  parts[#parts + 1] = "<thead><tr>"
  for k, column in ipairs(columns) do
    local numeric = rows[1] and type(rows[1][k]) == "number"
    parts[#parts + 1] = ('<th scope="col"%s>%s</th>'):format(numeric and ' class="n"' or "",
      escape(heading_of(column)))
  end
  parts[#parts + 1] = "</tr></thead>\n<tbody>"
  for _, row in ipairs(rows) do
    local cells = {}
    for k, column in ipairs(columns) do cells[k] = cell(row[k], column) end
    parts[#parts + 1] = "<tr>" .. table.concat(cells) .. "</tr>"
  end
  parts[#parts + 1] = "</tbody></table></div>"
  return table.concat(parts, "\n")
end

-- The data of a plot as a table: one row per point.
local function plot_data(spec)
  local columns = { { name = "series" }, { name = spec.x.label, unit = spec.x.unit },
    { name = spec.y.label, unit = spec.y.unit } }
  local rows = {}
  for _, series in ipairs(spec.series) do
    for k = 1, #series.x do rows[#rows + 1] = { series.name, series.x[k], series.y[k] } end
  end
  return "<details><summary>Data of this plot</summary>" .. table_html(columns, rows) .. "</details>"
end

local function anchor(index) return "s" .. index end

local function figure(picture, caption, extra, why)
  picture = picture or ('<p class="caution"><strong>Not drawn.</strong> %s</p>\n'):format(
    escape(why or "the picture is missing"))
  return ("<figure>\n%s<figcaption>%s</figcaption>%s</figure>"):format(picture, inline(caption),
    extra or "")
end

local writers = {
  heading = function(item, index)
    return ('<h2 id="%s">%s</h2>'):format(anchor(index), escape(item.text))
  end,
  prose = function(item) return "<p>" .. inline(item.text) .. "</p>" end,
  value = function(item)
    return ("<dt>%s</dt><dd>%s%s</dd>"):format(escape(item.label), escape(item.text),
      item.note and " <small>(" .. escape(item.note) .. ")</small>" or "")
  end,
  caution = function(item)
    return '<p class="caution"><strong>Caution.</strong> ' .. inline(item.text) .. "</p>"
  end,
  table = function(item) return table_html(item.columns, item.rows, item.caption) end,
  plot = function(item, _, pictures, why)
    return figure(pictures[item.name], item.spec.alt or item.spec.title, plot_data(item.spec), why)
  end,
  drawing = function(item, _, pictures)
    return figure(pictures[item.name], item.caption or item.picture.title)
  end,
}

local function contents(page)
  local links = {}
  for i, item in ipairs(page.items) do
    if item.kind == "heading" then
      links[#links + 1] = ('<li><a href="#%s">%s</a></li>'):format(anchor(i), escape(item.text))
    end
  end
  if #links < 3 then return "" end
  return '<nav aria-label="Contents"><ul>\n' .. table.concat(links, "\n") .. "\n</ul></nav>\n"
end

--- Renders a page.
-- @tparam page page
-- @tparam table pictures SVG text by name
-- @string[opt] why pictures are missing
-- @treturn string
function html.render(page, pictures, why)
  local parts, before = {}, nil
  for i, item in ipairs(page.items) do
    if item.kind == "value" and before ~= "value" then parts[#parts + 1] = '<dl class="values">' end
    if item.kind ~= "value" and before == "value" then parts[#parts + 1] = "</dl>" end
    parts[#parts + 1] = writers[item.kind](item, i, pictures, why)
    before = item.kind
  end
  if before == "value" then parts[#parts + 1] = "</dl>" end
  return ('<!DOCTYPE html>\n<html lang="en">\n<head>\n<meta charset="utf-8">\n'
    .. '<meta name="viewport" content="width=device-width, initial-scale=1">\n<title>%s</title>\n'
    .. "<style>\n%s</style>\n</head>\n<body>\n<h1>%s</h1>\n%s%s\n</body>\n</html>\n"):format(
    escape(page.title), style, escape(page.title), contents(page), table.concat(parts, "\n"))
end

return html
