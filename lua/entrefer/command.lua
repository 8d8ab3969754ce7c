--- The command line: `entrefer list | describe RECIPE | check RECIPE | run RECIPE name=value ... --out
-- DIR | compare OLD NEW`.
-- @module entrefer.command
local argparse = require "argparse"
local compare = require "entrefer.compare"
local lfs = require "lfs"
local quantity = require "entrefer.quantity"
local recipe = require "entrefer.recipe"
local write = require "entrefer.write"

local command = {}

local function parser()
  local p = argparse("entrefer", "Gapped magnetic parts that measure their own current.")
    :epilog("Exit codes: 0 done, 1 a recipe, an input or a solve failed, 2 wrong use.")
  p:require_command(true)
  p:command_target("command")
  p:command("list", "List the recipes that come with the library.")
  local describe = p:command("describe", "Show what a recipe does, its inputs and results.")
  describe:argument("recipe", "Recipe file, or the name of one that comes with the library.")
  local check = p:command("check", "Check a recipe without running its flow.")
  check:argument("recipe", "Recipe file, or the name of one that comes with the library.")
  local compared = p:command("compare", "Say what moved between two runs, and by how much.")
  compared:argument("old", "Folder of the older run (--out), or its results.json.")
  compared:argument("new", "Folder of the newer run, or its results.json.")
  local run = p:command("run", "Run a recipe.")
  run:argument("recipe", "Recipe file, or the name of one that comes with the library.")
  run:argument("inputs", "Inputs as name=value, e.g. spec=my/spec.lua or current=\"12 A\".")
    :args("*")
  run:option("--out", "Folder for the report and the tables (made when missing).")
  return p
end

local function folders(here)
  return { here .. "/../../recipes", here .. "/../share/entrefer/recipes" }
end

local function is_file(path) return lfs.attributes(path, "mode") == "file" end

local function find_recipe(name, here)
  if is_file(name) then return name end
  for _, folder in ipairs(folders(here)) do
    local path = folder .. "/" .. name .. (name:match("%.lua$") and "" or ".lua")
    if is_file(path) then return path end
  end
  error(("there is no recipe %s; `entrefer list` shows the ones that come with the library"):format(
    name), 0)
end

local function list(_, here)
  for _, folder in ipairs(folders(here)) do
    if lfs.attributes(folder, "mode") == "directory" then
      local names = {}
      for entry in lfs.dir(folder) do
        if entry:match("%.lua$") then names[#names + 1] = entry end
      end
      table.sort(names)
      for _, entry in ipairs(names) do
        local loaded = recipe.load(folder .. "/" .. entry)
        io.write(("%-24s %s\n"):format(entry:gsub("%.lua$", ""), loaded.purpose))
      end
      return
    end
  end
end

local function describe(options, here)
  local loaded = recipe.load(find_recipe(options.recipe, here))
  io.write(loaded.title, "\n\n", loaded.purpose, "\n\nInputs\n")
  for _, input in ipairs(loaded.inputs) do
    io.write(("  %-20s %-10s %s%s\n"):format(input.name, input.unit or input.kind, input.help or "",
      input.default ~= nil and (" (default %s)"):format(tostring(input.default)) or ""))
  end
  io.write("\nResults\n")
  for _, result in ipairs(loaded.results) do
    io.write(("  %-24s %-6s %s\n"):format(result.name, result.unit or "text", result.help or ""))
  end
end

local function read_inputs(list_of_inputs)
  local values = {}
  for _, pair in ipairs(list_of_inputs) do
    local name, value = pair:match("^([%a][%w_]*)=(.*)$")
    if not name then error(("%q is no input; allowed: name=value"):format(pair), 0) end
    values[name] = value
  end
  return values
end

local function make_folder(path)
  local made = path:match("^/") and "/" or ""
  for part in path:gmatch("[^/]+") do
    made = made .. part .. "/"
    if not lfs.attributes(made, "mode") then
      local done, message = lfs.mkdir(made)
      if not done then error(("the folder %s can't be made: %s"):format(made, message), 0) end
    end
  end
end

local function show_results(loaded, results)
  io.write("\nResults\n")
  for _, declared in ipairs(loaded.results) do
    local value = results[declared.name]
    if value ~= nil then
      io.write(("  %-24s %s\n"):format(declared.name, declared.unit
        and quantity.format(value, declared.unit, 4, { ascii = true }) or tostring(value)))
    end
  end
end

local function run(options, here)
  local loaded = recipe.load(find_recipe(options.recipe, here))
  local results, page, provenance = recipe.run(loaded, read_inputs(options.inputs),
    { process = true })
  io.write(page:text())
  show_results(loaded, results)
  if options.out then
    make_folder(options.out)
    local written = page:save(options.out)
    for _, record in ipairs { { "results", results }, { "provenance", provenance } } do
      local path = ("%s/%s.json"):format(options.out, record[1])
      write.file(path, write.json(record[2]))
      written[#written + 1] = path
    end
    io.write("\nWritten\n  ", table.concat(written, "\n  "), "\n")
  end
end

local function check(options, here)
  local path = find_recipe(options.recipe, here)
  local loaded = recipe.load(path)
  io.write(("%s: good, %d inputs, %d results\n"):format(path, #loaded.inputs, #loaded.results))
end

local function compare_runs(options)
  local found = compare.runs(options.old, options.new)
  io.write(found.results:text(), ("\n%d of %d results moved\n"):format(found.moved,
    #found.results.rows))
  if #found.provenance.rows > 0 then io.write("\n", found.provenance:text()) end
end

local commands = { check = check, compare = compare_runs, list = list, describe = describe, run = run }

--- Runs the command.
-- @tparam table arguments the words after the command's name
-- @string here folder of the command's file
-- @treturn integer exit code
function command.main(arguments, here)
  local done, options = parser():pparse(arguments)
  if not done then
    io.stderr:write("entrefer: ", tostring(options), "; see `entrefer --help`\n")
    return 2
  end
  local ok, err = pcall(commands[options.command], options, here)
  if ok then return 0 end
  io.stderr:write("entrefer: ", tostring(err), "\n")
  return 1
end

return command
