-- Every block of Lua in the documentation runs as it stands.
local ef = require "entrefer"
local command = require "tests.command"
local lfs = require "lfs"

local function pages()
  local list = { "README.md", "DEVELOPERS.md" }
  local function walk(folder)
    for entry in lfs.dir(folder) do
      local path = folder .. "/" .. entry
      if entry:match("%.md$") then list[#list + 1] = path end
      if entry:sub(1, 1) ~= "." and lfs.attributes(path, "mode") == "directory" then walk(path) end
    end
  end
  walk("docs")
  table.sort(list)
  return list
end

describe("the documentation", function()
  local blocks = 0
  for _, path in ipairs(pages()) do
    local text = command.read(path)
    for block in text:gmatch("```lua\n(.-)```") do
      blocks = blocks + 1
      it(("runs its block %d in %s"):format(blocks, path), function()
        local env = setmetatable({ print = function() end }, { __index = _G })
        local chunk = assert(load(block, path, "t", env))
        local result = chunk()
        if type(result) == "table" and result.current then ef.design.requirements(result) end
      end)
    end
  end

  it("has blocks to run", function() assert.is_true(blocks >= 6) end)

  it("links only to files that exist", function()
    for _, path in ipairs(pages()) do
      local folder = path:match("^(.*/)") or ""
      for target in command.read(path):gmatch("%]%(([^)#]+)%)") do
        if not target:match("^%a+:") then
          assert.is_truthy(lfs.attributes(folder .. target, "mode"), path .. ": " .. target)
        end
      end
    end
  end)

  it("shows in the README what the demo says", function()
    local code, out = command.entrefer("run part-from-spec spec=examples/orchard-cart/spec.lua")
    assert.equal(0, code)
    local shown = command.read("README.md"):match("opens with the verdict:\n\n```\n(.-)\n```")
    assert.is_truthy(shown and out:find(shown, 1, true), "the README's output is not the demo's")
  end)
end)
