-- Run inside headless Neovim (0.7 or newer): its own language client on one file. Prints what the editor shows, then
-- replaces one line and prints what it shows then, one JSON object a line:
--   {"step":"open","shown":[{"line":0,"column":0,"end_line":0,"end_column":0,"code":"…","message":"…","severity":1}],"hover":"…"}
-- Lines and columns are the editor's own: from 0, columns in bytes.
--
-- Environment: SERVER (program), FILE, RULE (the finding that is waited for), LINE (from 1) and TEXT (what it becomes).

local function env(name) return (assert(os.getenv(name), name .. ' is not set')) end
local rule = env('RULE')

local function leave(code, why)
  if why then io.stderr:write(why .. '\n') end
  vim.cmd('silent! ' .. code .. 'cquit!')
end

vim.cmd('set noswapfile hidden')
vim.cmd('silent edit ' .. vim.fn.fnameescape(env('FILE')))
local buffer = vim.api.nvim_get_current_buf()
local ended
local client = vim.lsp.start_client({
  name = 'halfplane',
  cmd = { env('SERVER') },
  root_dir = vim.fn.fnamemodify(env('FILE'), ':p:h'),
  flags = { debounce_text_changes = 10 },
  on_exit = function(code) ended = code end,
})
if not client then return leave(3, 'the server did not start') end
vim.lsp.buf_attach_client(buffer, client)

local function shown()
  local all = {}
  for _, d in ipairs(vim.diagnostic.get(buffer)) do
    local code = d.code or (d.user_data and d.user_data.lsp and d.user_data.lsp.code)
    all[#all + 1] = { line = d.lnum, column = d.col, end_line = d.end_lnum, end_column = d.end_col,
      code = code, message = d.message, severity = d.severity }
  end
  return all
end

local function find()
  for _, d in ipairs(shown()) do
    if d.code == rule then return d end
  end
end

local function tell(step, hover)
  local all = shown()
  if #all == 0 then all = nil end -- an empty table would be written as an object
  io.stdout:write(vim.json.encode({ step = step, shown = all, hover = hover }) .. '\n')
  io.stdout:flush()
end

local function await(what, met)
  if vim.wait(20000, function() return ended ~= nil or met() end, 5) and ended == nil then return true end
  leave(1, what .. ' did not come' .. (ended and ', the server has ended' or ''))
  return false
end

if not await('the finding', function() return find() ~= nil end) then return end
local at = find()
local answers = vim.lsp.buf_request_sync(buffer, 'textDocument/hover', {
  textDocument = { uri = vim.uri_from_bufnr(buffer) },
  position = { line = at.line, character = at.column },
}, 5000)
local hover = answers and answers[client] and answers[client].result
tell('open', hover and hover.contents.value)

local line = tonumber(env('LINE'))
vim.api.nvim_buf_set_lines(buffer, line - 1, line, true, { env('TEXT') })
if not await('the end of the finding', function() return find() == nil end) then return end
tell('edited')

vim.lsp.stop_client(client)
vim.wait(3000, function() return ended ~= nil end, 5)
if ended ~= 0 then return leave(2, 'the server did not end well: ' .. tostring(ended)) end
leave(0)
