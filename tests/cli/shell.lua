--- Running commands for the tests of the command line: fresh folders, and what a command says.
-- Plain Lua and a POSIX shell; used by cases.lua and escapes.lua.

local shell = {}

function shell.quote(text)
    return "'" .. text:gsub("'", "'\\''") .. "'"
end

function shell.read(path)
    local file = io.open(path, "rb")
    if not file then
        return nil
    end
    local text = file:read("a")
    file:close()
    return text
end

function shell.write(path, text)
    local file = assert(io.open(path, "wb"))
    assert(file:write(text))
    assert(file:close())
end

local function output_of(command)
    local pipe = assert(io.popen(command))
    local text = pipe:read("a")
    assert(pipe:close(), "failed: " .. command)
    return (text:gsub("\n$", ""))
end

--- A new empty folder, resolved.
function shell.folder()
    return output_of('cd "$(mktemp -d)" && pwd -P')
end

function shell.remove(folder)
    assert(folder:find("^/.+/.+"), "not a folder to remove: " .. folder)
    os.execute("rm -rf " .. shell.quote(folder))
end

function shell.make_folders(path)
    assert(os.execute("mkdir -p " .. shell.quote(path)))
end

function shell.absolute(path)
    return output_of("cd " .. shell.quote(path:match("^(.*)/[^/]*$") or ".") .. " && pwd -P") .. "/" .. path:match("[^/]*$")
end

--- Run `command` in `folder`; `before` is shell text that sets up its environment. Returns what it wrote on standard
-- output and standard error, and its exit code (128 + n for signal n).
function shell.run(folder, before, command)
    local out, err = os.tmpname(), os.tmpname()
    local text = ("cd %s || exit 99\n%s\n( %s\n) >%s 2>%s </dev/null"):format(shell.quote(folder), before, command,
        shell.quote(out), shell.quote(err))
    local _, how, code = os.execute(text)
    local said, complained = shell.read(out), shell.read(err)
    os.remove(out)
    os.remove(err)
    return said, complained, how == "signal" and 128 + code or code
end

--- Shell text that puts the command and the module of the build folder where they are found.
function shell.environment(build, lua)
    build = shell.absolute(build .. "/x"):match("^(.*)/x$")
    return table.concat({
        "BUILD=" .. shell.quote(build),
        "LUA=" .. shell.quote(lua),
        "LUA_CPATH=" .. shell.quote(build .. "/?.so;;"),
        "PATH=" .. shell.quote(build) .. ":$PATH",
        -- A module with the address sanitizer in it needs the sanitizer's library first in the stock interpreter,
        -- whose own memory is not all given back at its end.
        [[if grep -q __asan_init "$BUILD/thole.so"; then
            LUA="env LD_PRELOAD=$(gcc -print-file-name=libasan.so):$(gcc -print-file-name=libubsan.so) ]]
            .. [[ASAN_OPTIONS=detect_leaks=0 $LUA"
        fi]],
        "export BUILD LUA LUA_CPATH PATH",
        -- interrupt COMMAND …: send SIGINT once it has said "ready" on standard error; its exit code. A command
        -- that does not end within ten seconds is killed.
        [[interrupt() {
            exec 5<&0; env --default-signal=INT "$@" <&5 2>said & pid=$!
            n=0; until grep -qs ready said || [ $n -ge 200 ]; do sleep 0.05; n=$((n + 1)); done
            kill -INT $pid
            n=0; while kill -0 $pid 2>/dev/null && [ $n -lt 200 ]; do sleep 0.05; n=$((n + 1)); done
            kill -KILL $pid 2>/dev/null && echo "did not end" >&2
            wait $pid; code=$?
            grep -v ready said >&2
            return $code
        }]],
    }, "\n")
end

return shell
