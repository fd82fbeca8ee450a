#!/bin/sh
# Prints what the core costs and fails above the limits. usage: cost.sh BUILD
set -eu
build=$1
bad=0

flash() { avr-size "$1" | awk 'NR == 2 { print $1 + $2 }'; }
ram() { avr-size "$1" | awk 'NR == 2 { print $2 + $3 }'; }

# told PATTERN FIGURE: the README's table must say the same.
told() {
  grep -q "^| $1 | $2\( bytes\)\? |" ../README.md || { echo "  README.md says otherwise"; bad=1; }
}

say() { # what, is, limit, how the README calls it
  printf '%-48s %5d of %5d\n' "$1" "$2" "$3"
  if [ "$2" -gt "$3" ]; then echo "  above the limit"; bad=1; fi
  told "$4" "$2"
}

say "core: bytes of flash" $(($(flash "$build/core.elf") - $(flash "$build/stub.elf"))) "$FLASH_MAX" "core, flash"
say "core: bytes of RAM (two channels, four lines)" "$(ram "$build/core.elf")" "$RAM_MAX" "core, RAM.*"

"$build/meter" "$build/core.elf" > "$build/cycles"
say "core: cycles of the slowest sample line" "$(sort -n "$build/cycles" | tail -n 1 | cut -d' ' -f1)" "$CYCLES_MAX" "the slowest sample line, cycles"
sed 's/^/  /' "$build/cycles"

beside() { # file, how the README calls it
  printf '%-48s %5d\n' "beside it, $1: bytes of flash" "$(flash "$build/$1.o")"
  told "beside it: $2, flash" "$(flash "$build/$1.o")"
}
beside taut_sensor "sensor helper"
beside taut_log "card logger"

# Division, long multiplication and floating point come as calls to these.
helpers=$(avr-nm "$build/core.elf" | grep -E '__(u?div|u?mod|mul|.*[sd]f)' || true)
if [ -n "$helpers" ]; then
  echo "the core calls for arithmetic that it must not use:"
  echo "$helpers"
  bad=1
fi
exit $bad
