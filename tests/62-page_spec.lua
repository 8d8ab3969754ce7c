-- The page and its renderers.
local ef = require "entrefer"
local command = require "tests.command"
local page_module = require "entrefer.page"
local process = require "tests.process"
local support = require "tests.support"
local refuses = support.refuses

-- Markup, quotes, and what a plotting program might run as a command.
local trace = os.tmpname()
os.remove(trace)
local hostile = "<script>alert(1)</script> & \"quoted\" 'too' ]] <!-- x `touch " .. trace .. "` $(touch "
  .. trace .. ") @x"

local part = ef.part { core = "ETD 39/20/13", material = "PW3b", gaps = { { length = "1.5 mm" } },
  windings = { { turns = 16 } } }
local probe = ef.probe { part = part, sensor = "thin linear Hall, 300 mT" }

local function full_page(text)
  local page = page_module.new(text)
  page:heading(text)
  page:prose(text .. " with **bold** and `code`")
  page:value(text, 1.5e-3, "m", text)
  page:value("plain", text)
  page:caution(text)
  page:heading("Second")
  page:table("figures", { columns = { { name = text }, { name = "x", unit = "mm", digits = 3 } },
    rows = { { text, 1.25 }, { "=1+1", -3 } } }, text)
  page:plot("curve", { title = text, alt = text, x = { label = text, unit = "A" },
    y = { label = "y", unit = "T", from = 0 },
    series = { { name = text, x = { 0, 1, 2 }, y = { 0, 0.5, 0.7 } },
      { name = "limit", kind = "limit", x = { 0, 2 }, y = { 0.6, 0.6 } } } })
  page:heading("Third")
  page:drawing("section", part, probe, text)
  return page
end

local has_gnuplot = process.run "command -v gnuplot"
local has_tidy = process.run "command -v tidy"

describe("a page", function()
  it("keeps hostile text as text", function()
    local page = full_page(hostile)
    local pictures = page:pictures()
    local html = page:html(pictures)
    assert.is_nil(html:find("<script", 1, true))
    assert.is_truthy(html:find("&lt;script&gt;", 1, true))
    for _, picture in pairs(pictures) do
      assert.is_nil(picture:find("<script", 1, true))
    end
    assert.is_nil(io.open(trace), "text of a plot was run as a command")
    assert.is_nil(page:markdown():find("[^\\]<script"))
    assert.is_nil(html:find("http:", 1, true) and html:gsub("http://www.w3.org/[%w/]*", "")
      :find("http:", 1, true), "no address but the names of the SVG standard")
  end)

  it("goes out and comes back as plain data", function()
    local page = full_page("a title")
    local back = page_module.from(page:plain())
    assert.equal(page:text(), back:text())
    assert.equal(page:markdown(), back:markdown())
  end)

  it("refuses what it can't hold", function()
    local page = page_module.new("x")
    refuses("page name", "letters", page.table, page, "../x", { columns = { { name = "a" } }, rows = {} })
    page:table("t", { columns = { { name = "a" } }, rows = {} })
    refuses("page name", "not used", page.table, page, "t", { columns = { { name = "a" } }, rows = {} })
    refuses("page name", "not used", page.table, page, "results", { columns = { { name = "a" } }, rows = {} })
    refuses("plot series", "at least one", page.plot, page, "p",
      { title = "t", x = { label = "x" }, y = { label = "y" }, series = {} })
    refuses("series 1 points", "as many", page.plot, page, "p", { title = "t", x = { label = "x" },
      y = { label = "y" }, series = { { name = "s", x = { 1 }, y = { 1, 2 } } } })
    refuses("number", "finite", page.plot, page, "p", { title = "t", x = { label = "x" },
      y = { label = "y" }, series = { { name = "s", x = { 1 }, y = { 0 / 0 } } } })
    refuses("page item 1", "kind of item", page_module.from, { title = "t", items = { { kind = "x" } } })
    refuses("picture style", "unknown", page_module.from, { title = "t", items = { { kind = "drawing",
      name = "d", picture = { box = { left = 0, bottom = 0, width = 1, height = 1 }, pixels = 10,
        title = "t", shapes = { { kind = "line", x1 = 0, y1 = 0, x2 = 1, y2 = 1,
          style = 'x" onload="y' } } } } } })
    refuses("heading", "text", page.heading, page, 5)
  end)

  it("draws a part of every topology, and nothing for a custom core", function()
    local page = page_module.new("x")
    for i, core in ipairs { "U 25/20/13", "R 25/15/10", "E 42/21/15", "P 30/19" } do
      page:drawing("d" .. i, ef.part { core = core, material = "PW3b",
        gaps = { { length = "0.6 mm" } }, windings = { { turns = 5 } } })
    end
    page:drawing("custom", ef.part { core = { shape = "custom",
      sections = { { name = "a", length = "50 mm", area = "50 mm2" } } }, material = "PW3b",
      windings = { { turns = 5 } } })
    assert.equal(4, #page.items)
    -- To scale: the drawn window of the E core is as wide as the core's own.
    local picture = page.items[3].picture
    local scale = picture.pixels / picture.box.width
    local svg = page:pictures().d3
    local post = part.core and ef.core "E 42/21/15".geometry.centre_pole.width
    assert.is_truthy(svg:find(('width="%.2f"'):format(post * scale), 1, true))
  end)

  it("says in the report when plots can't be drawn, and renders the rest", function()
    local html = full_page("t"):html({}, "no plotter")
    assert.is_truthy(html:find("Not drawn", 1, true) and html:find("no plotter", 1, true))
    assert.is_truthy(html:find("<table>", 1, true))
  end)
end)

describe("the HTML of a report", function()
  it("is valid, self-contained and carries each plot's data as a table", function()
    if not (has_gnuplot and has_tidy) then pending("gnuplot-nox or tidy is not installed") end
    local folder = command.fresh_folder()
    local code, _, err = command.entrefer(
      "run part-from-spec spec=examples/orchard-cart/spec.lua --out " .. folder)
    assert.equal(0, code, err)
    local html = command.read(folder .. "/report.html")
    local _, summary = process.run(("tidy -q -e %s/report.html"):format(folder))
    -- tidy 5.6 knows HTML5; SVG inside it is passed over.
    assert.is_nil(summary:find("Error:", 1, true), summary)
    assert.is_nil(html:find("<script", 1, true))
    assert.is_nil(html:find("<link", 1, true))
    assert.is_nil(html:find('src="', 1, true))
    local _, plots = html:gsub("Data of this plot", "")
    assert.equal(4, plots)
    local _, titles = html:gsub("<svg", "")
    assert.equal(5, titles)
    command.remove_folder(folder)
  end)
end)
