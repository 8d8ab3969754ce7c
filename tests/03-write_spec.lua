local cjson = require "cjson"
local json = require "entrefer.json"
local lfs = require "lfs"
local support = require "tests.support"
local write = require "entrefer.write"
local near, refuses = support.near, support.refuses

local columns = { { name = "current", unit = "A", digits = 3 }, { name = "share", unit = "1" },
  { name = "note" } }
local made = write.table { columns = columns, rows = {
  { 12, 0.5, "plain" }, { -0.0, 1 / 3, "with, comma" }, { 1e-9, nil, "a \"quote\"\nand a line" },
  { 40.04, 2e9, "=1+1" }, { 3, 1, true },
} }

-- An independent reader of RFC 4180 text, written from its grammar.
local function read_csv(text)
  local rows, row, at = {}, {}, 1
  while at <= #text do
    local cell
    if text:sub(at, at) == '"' then
      local finish = at
      repeat
        finish = assert(text:find('"', finish + 1, true), "a quote is not closed")
        local doubled = text:sub(finish + 1, finish + 1) == '"'
        if doubled then finish = finish + 1 end
      until not doubled
      cell, at = text:sub(at + 1, finish - 1):gsub('""', '"'), finish + 1
    else
      cell = text:match('^[^,\r\n"]*', at)
      at = at + #cell
    end
    row[#row + 1] = cell
    if text:sub(at, at) == "," then
      at = at + 1
    else
      assert(text:sub(at, at + 1) == "\r\n", "a record doesn't end with CR LF")
      rows[#rows + 1], row, at = row, {}, at + 2
    end
  end
  return rows
end

describe("a table", function()
  it("as text stands in aligned columns, numbers to the right", function()
    local small = write.table { columns = columns,
      rows = { { 12, 0.25, "\u{B5} is one letter" }, { 1234.5, nil, "two\nlines" } } }
    assert.equal(table.concat({
      "current [A]   share  note",
      "-----------  ------  ---------------",
      "       12.0  0.2500  \u{B5} is one letter",
      "       1230          two lines", "" }, "\n"), small:text())
  end)

  it("as Markdown has one line per row and no markup from its cells", function()
    local text = write.table({ columns = { { name = "B", unit = "mT" }, { name = "note" } },
      rows = { { 12, "a|b" }, { 13, "<b>*x*_y_`z`</b>" }, { 14, "[text](http://example.org)\n\nnew" } },
    }):markdown()
    local lines = {}
    for line in text:gmatch("([^\n]*)\n") do lines[#lines + 1] = line end
    assert.equal(5, #lines)
    assert.is_truthy(lines[1]:find("| B [mT] | note", 1, true))
    assert.is_truthy(lines[2]:match("^| %-+: | %-+ |$"))
    for _, line in ipairs(lines) do
      local _, bars = line:gsub("\\|", ""):gsub("|", "")
      assert.equal(3, bars)
      assert(not line:gsub("\\[*_`<|]", ""):find("[*_`<]"), line)
      assert(not line:find("[^\\]%]%("), line)
    end
  end)

  it("as CSV reads back by RFC 4180", function()
    local rows = read_csv(made:csv())
    assert.same({ "current [A]", "share", "note" }, rows[1])
    assert.same({ "12", "0.5", "plain" }, rows[2])
    assert.same({ "0", "0.333333", "with, comma" }, rows[3])
    assert.same({ "1e-09", "", "a \"quote\"\nand a line" }, rows[4])
    assert.equal("true", rows[6][3])
    assert.equal(6, #rows)
  end)

  it("as CSV starts no formula in a spreadsheet", function()
    local texts = { "=1+1", "+cmd", "-2+3", "@sum", "\tx", "\rx", "+1 %", "-0.5", "plain", "+" }
    local rows = {}
    for i, text in ipairs(texts) do rows[i] = { text } end
    local read = read_csv(write.table({ columns = { { name = "=note" } }, rows = rows }):csv())
    assert.equal("'=note", read[1][1])
    for i, text in ipairs(texts) do
      -- A signed number is left alone, all else that starts like a formula is marked as text.
      local harmless = text == "plain" or text == "+1 %" or text == "-0.5"
      assert.equal(harmless and text or "'" .. text, read[i + 1][1])
    end
  end)

  it("as JSON holds columns, units and rows", function()
    local read = cjson.decode(made:json())
    assert.same({ name = "current", unit = "A" }, read.columns[1])
    assert.equal(5, #read.rows)
    assert.equal(cjson.null, read.rows[3][2])
    near(1 / 3, read.rows[2][2], 1e-6)
    assert.equal("a \"quote\"\nand a line", read.rows[3][3])
    assert.same({}, cjson.decode(write.table({ columns = columns, rows = {} }):json()).rows)
  end)

  it("names the row and column of what can't be written", function()
    local function with(row) return { columns = columns, rows = { { 1, 1, "x" }, row } } end
    refuses("row 2, share", "a finite number", write.table, with { 1, 0 / 0 })
    refuses("row 2, current", "a finite number", write.table, with { 1 / 0 })
    refuses("row 2, note", "number, text or boolean", write.table, with { 1, 2, {} })
    refuses("row 2, cell", "1 to 3", write.table, with { 1, 2, "x", 4 })
    refuses("row 2, cell", "1 to 3", write.table, with { name = "x" })
    refuses("row 2", "a list of cells", write.table, with "x")
    refuses("columns", "a list of columns", write.table, { rows = {} })
    refuses("column 1 name", "text", write.table, { columns = { {} }, rows = {} })
    refuses("rows", "a list of rows", write.table, { columns = columns })
    refuses("colums", "did you mean \"columns\"", write.table, { colums = {} })
  end)
end)

describe("a record as JSON", function()
  it("is the same bytes whatever the order its fields were set in", function()
    local names = {}
    for i = 1, 50 do names[i] = "field " .. i * 7919 % 101 end
    local up, down = {}, {}
    for i = 1, #names do up[names[i]] = i end
    for i = #names, 1, -1 do down[names[i]] = i end
    assert.equal(write.json(up), write.json(down))
  end)

  it("reads back as the same data", function()
    local record = { text = "\"\\/\b\f\n\r\t\0\127 \u{B5}\u{3A9} \u{1F9F2}", yes = true, no = false,
      list = { 1, { 2, {} }, "x" }, numbers = { -1.5e-7, 0, 1e22, 123456 }, whole = math.maxinteger }
    local read = cjson.decode(json.encode(record))
    assert.equal(record.text, read.text)
    assert.same(record.list, read.list)
    assert.same(record.numbers, read.numbers)
    assert.is_true(read.yes)
    assert.is_false(read.no)
    assert.is_truthy(json.encode(record):find("9223372036854775807", 1, true))
  end)

  it("hides the last digits of a double", function()
    assert.equal(write.json { x = 0.3 }, write.json { x = 0.1 + 0.2 })
  end)

  it("takes time in proportion to a deep list", function()
    local list = {}
    for _ = 1, 60 do list = { list, 1 } end
    local start = os.clock()
    json.encode(list)
    -- Work doubled at each of the 60 levels would never end.
    assert(os.clock() - start < 2)
  end)

  it("refuses what JSON can't hold", function()
    local cycle = {}
    cycle.itself = cycle
    refuses("record", "contains itself", write.json, cycle)
    refuses("number", "a finite number", write.json, { x = 0 / 0 })
    refuses("number", "a finite number", write.json, { x = -1 / 0 })
    refuses("value of a record", "a number, text", write.json, { x = print })
    refuses("key of a record", "text", write.json, { [true] = 1 })
    refuses("record", "holes or named fields", write.json, { 1, 2, x = 3 })
    refuses("text of a record", "UTF%-8", write.json, { x = "\xff" })
  end)
end)

describe("a file", function()
  local folder, path

  before_each(function()
    folder = os.tmpname()
    os.remove(folder)
    assert(lfs.mkdir(folder))
    path = folder .. "/result.txt"
  end)

  local function entries()
    local names = {}
    for name in lfs.dir(folder) do
      if name ~= "." and name ~= ".." then names[#names + 1] = name end
    end
    table.sort(names)
    return names
  end

  after_each(function()
    for _, name in ipairs(entries()) do assert(os.remove(folder .. "/" .. name)) end
    assert(lfs.rmdir(folder))
  end)

  local function content()
    local file = assert(io.open(path, "rb"))
    local text = file:read("a")
    file:close()
    return text
  end

  it("is written byte for byte and replaces an older one", function()
    write.file(path, "old")
    write.file(path, "new\r\n\0\xff")
    assert.equal("new\r\n\0\xff", content())
    assert.same({ "result.txt" }, entries())
  end)

  it("into a folder that isn't there, or over a folder, is refused", function()
    refuses("output file", "can't be written", write.file, folder .. "/none/x.txt", "x")
    assert(lfs.mkdir(path))
    refuses("output file", "can't be written", write.file, path, "x")
    assert.same({ "result.txt" }, entries())
  end)

  -- Runs write.file with one of its steps failing, as on a full disk.
  local function with_failing(step)
    local open, rename = io.open, os.rename
    local function failing() return nil, "no space left" end
    -- luacheck: push ignore 122
    if step == "rename" then os.rename = failing end
    io.open = function(...)
      if step == "open" then return failing() end
      local file = assert(open(...))
      return {
        write = function(_, text)
          if step ~= "write" then return file:write(text) end
          file:write(text:sub(1, 1))
          return failing()
        end,
        close = function()
          file:close()
          if step == "close" then return failing() end
          return true
        end,
      }
    end
    local done, err = pcall(write.file, path, "new text")
    io.open, os.rename = open, rename
    -- luacheck: pop
    return done, err
  end

  it("is the old one, whole, whichever step of writing the new one fails", function()
    write.file(path, "old text")
    for _, step in ipairs { "open", "write", "close", "rename" } do
      local done, err = with_failing(step)
      assert.is_false(done, step)
      assert.equal(path .. " can't be written: no space left", err.message)
      assert.equal("old text", content(), step)
      assert.same({ "result.txt" }, entries(), step)
    end
    assert.is_true(with_failing("none"))
    assert.equal("new text", content())
  end)
end)
