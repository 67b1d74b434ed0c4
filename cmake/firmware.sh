#!/bin/sh
# cmake/firmware.sh - builds examples/firmware for three microcontrollers, runs it under QEMU and on this machine with
# every compiler that is here, and holds it to what the README says of it:
#   - the same commands, bit for bit, on every tick of the recorded run; else it names the first tick and field
#   - nothing in the library's part that allocates, prints, throws, or calculates in double precision
#   - instructions, bytes and stack, which it writes into the README, between the two marks there
#
#   sh cmake/firmware.sh            installs what is missing, and writes the README's table
#   sh cmake/firmware.sh --check    writes nothing; fails when a figure is off by over 2 %
#
# WEND_BUILD names another build folder than build/firmware, seen from the project's.
set -eu
case $0 in */*) cd "${0%/*}/.." ;; *) cd .. ;; esac

build=${WEND_BUILD:-build/firmware}
check=no
if [ "${1:-}" = --check ]; then
  check=yes
fi
setup_for=firmware
. cmake/setup.sh
has_header eigen3/Eigen/src/Core/Reshaped.h
eigen=$prefix/include/eigen3
source=$PWD/examples/firmware
case $build in /*) ;; *) build=$PWD/$build ;; esac
mkdir -p "$build"
failed=0

fail() {
  echo "FAILED: $*"
  failed=1
}

# --- The recorded run, and the same program on this machine, in as many ways as it can. ----------------------------------

same_bits='-ffp-contract=off -fno-math-errno' # what the same bits need: see the README
$CXX -O2 -std=c++20 $same_bits -I include -isystem "$eigen" "$source/record.cpp" "$source/tick.cpp" -o "$build/record"
"$build/record" "$build/recorded.bin"

# All of the program's C++ in one file: it compiles in a third of the time.
for part in main decisions tick decide decide_example machines/desk; do
  echo "#include \"$source/$part.cpp\""
done >"$build/desk.cpp"

on_desk() { # on_desk <name> <C++ compiler> <options>...: its lines in <name>.out
  name=$1 cxx=$2
  shift 2
  {
    $cxx "$@" $same_bits -DRECORDED="\"$build/recorded.bin\"" -c "$source/recorded.S" -o "$build/$name.recorded.o"
    for form in by_hand by_hand_plain textbook; do
      $cxx -x c -std=c11 "$@" $same_bits -c "$source/$form.c" -o "$build/$name.$form.o"
    done
    $cxx -std=c++20 "$@" $same_bits -I include -isystem "$eigen" "$build/desk.cpp" -x none "$build/$name.recorded.o" \
      "$build/$name.by_hand.o" "$build/$name.by_hand_plain.o" "$build/$name.textbook.o" -lm -o "$build/$name"
    "$build/$name" >"$build/$name.out"
  } >"$build/$name.log" 2>&1 || echo "$name" >>"$build/broken"
}

desk_compilers() {
  for cxx in g++ clang++ clang++-14; do
    if command -v $cxx >/dev/null; then
      case $cxx in
        clang++-14) command -v clang++ >/dev/null || echo $cxx ;;
        *) echo $cxx ;;
      esac
    fi
  done
}

on_desks() { # on_desks <C++ compiler>
  on_desk "$1-O0" "$1" -O0
  on_desk "$1-O2" "$1" -O2
  on_desk "$1-O3" "$1" -O3
  if grep -qs '^flags.* avx2 ' /proc/cpuinfo && grep -qs '^flags.* fma ' /proc/cpuinfo; then
    on_desk "$1-O3-v3" "$1" -O3 -march=x86-64-v3
  fi
}

# --- The images, and what they print. ---------------------------------------------------------------------------------------

machines='cortex-m4f cortex-m3 rv32'

tool() { # tool <machine>: the prefix of its tools
  case $1 in
    cortex-*) echo arm-none-eabi- ;;
    *) echo riscv64-unknown-elf- ;;
  esac
}

emulator() {
  case $1 in
    cortex-m4f) echo 'qemu-system-arm -M mps2-an386' ;;
    cortex-m3) echo 'qemu-system-arm -M mps2-an385' ;;
    rv32) echo 'qemu-system-riscv32 -M virt -bios none' ;;
  esac
}

# With -icount shift=0 an instruction takes a nanosecond of the machine's time, and its counters count the same on every
# run; with sleep=off it does not wait for a tick in real time.
on_machine() {
  {
    cmake -S "$source" -B "$build/$1" --toolchain "$PWD/cmake/toolchain-$1.cmake" -DRECORDED="$build/recorded.bin" &&
      cmake --build "$build/$1" &&
      timeout 100 $(emulator "$1") -display none -monitor none -serial none -chardev "file,id=said,path=$build/$1.out" \
        -semihosting-config enable=on,target=native,chardev=said -icount shift=0,sleep=off \
        -kernel "$build/$1/firmware"
  } >"$build/$1.log" 2>&1 || echo "$1" >>"$build/broken"
}

rm -f "$build/broken" "$build"/*.out
compilers=$(desk_compilers)
(for cxx in $compilers; do on_desks "$cxx"; done) &
desks=$!
for machine in $machines; do
  on_machine "$machine"
done
wait $desks
if [ -s "$build/broken" ]; then
  while read -r name; do
    fail "$name: does not build, or does not run to its end; its last lines:"
    tail -n 15 "$build/$name.log"
    if [ -s "$build/$name.out" ]; then tail -n 1 "$build/$name.out"; fi
  done <"$build/broken"
  exit 1
fi

# --- The same bits everywhere. ----------------------------------------------------------------------------------------------

reference=cortex-m4f
compare() { # compare <lines> <other lines>: the first field that differs
  awk '
    FNR == 1 { ++file }
    $1 == "fields" { for (i = 2; i <= NF; ++i) field[i] = $i }
    $1 == "command" && file == 1 { for (i = 2; i <= NF; ++i) wanted[$2, i] = $i; ++ticks; next }
    $1 == "command" {
      ++seen
      for (i = 2; i <= NF; ++i) if ($i != wanted[$2, i]) {
        print "tick " $2 ", " field[i] ": " $i " instead of " wanted[$2, i]
        exit bad = 1
      }
    }
    END {
      if (bad) exit 1
      if (ticks < 5000 || seen != ticks) { print seen + 0 " ticks instead of " ticks + 0; exit 1 }
    }' "$1" "$2"
}

# A comparison that finds nothing proves nothing, so it has to find a flipped bit first.
awk '$1 == "command" && $2 == 4321 { sub(/.$/, "", $6); $6 = $6 "x" } { print }' "$build/$reference.out" >"$build/flipped"
case $(compare "$build/$reference.out" "$build/flipped") in
  'tick 4321, body.turn_rate'*) ;; *) fail 'the comparison does not find a changed field' ;;
esac
runs=0
for lines in "$build"/*.out; do
  name=${lines##*/}
  name=${name%.out}
  if difference=$(compare "$build/$reference.out" "$lines"); then
    runs=$((runs + 1))
  else
    fail "$name and $reference differ: $difference"
  fi
done
echo "same bits: $(grep -c ^command "$build/$reference.out") ticks, $runs ways to build and run"

# --- What the library's part needs. -----------------------------------------------------------------------------------------

# Two questions. What do its objects ask for? Only what is on the list. And what comes of it when that is linked, C
# library and all? Nothing that allocates, prints, unwinds, registers destructors, or calculates in double precision.
allowed='sqrtf|memcpy|memset|memmove|__aeabi_mem(cpy|set|clr|move)[48]?' # the compiler's own way to copy
single='__aeabi_f[a-z0-9]*|__aeabi_c?r?f(cmp[a-z]*|add|sub|mul|div)|__aeabi_u?i2f|__aeabi_f2u?iz' # no unit for floats
refused='malloc|calloc|realloc|free|_(malloc|calloc|realloc|free)_r|_?sbrk(_r)?|_Zn[aw].*|_Zd[al].*|__cxa_.*|_?_?[a-z]*printf.*'
refused="$refused|__aeabi_(c?r?d[a-z0-9]*|[a-z0-9]*2d)|__[a-z]*df[a-z0-9]*|_Unwind_.*|__gxx_.*|abort|exit|atexit"
refused="$refused|(sin|cos|tan|asin|acos|atan|atan2|exp|log|pow|fmod|hypot|remainder|cbrt)f?"

needs() { # needs <machine> <objects>...: what is wrong with them; nothing when all is well
  machine=$1
  shift
  case $machine in cortex-m3) list="$allowed|$single" ;; *) list=$allowed ;; esac
  "$(tool "$machine")ld" $(emulation "$machine") -r "$@" -o "$build/part.o"
  "$(tool "$machine")nm" -u "$build/part.o" | awk '{ print $NF }' | grep -Evx "$list" || true
  flags=$(sed -n 's/^CMAKE_CXX_FLAGS:STRING=//p' "$build/$machine/CMakeCache.txt")
  rm -f "$build/part.elf"
  "$(tool "$machine")gcc" $flags -nostartfiles -nodefaultlibs -Wl,--no-gc-sections,--entry=0,--unresolved-symbols=ignore-all \
    "$build/part.o" -lm -lc -lgcc -o "$build/part.elf" >"$build/part.log" 2>&1 || { echo 'does not link'; return 0; }
  "$(tool "$machine")nm" "$build/part.elf" | awk '{ print $NF }' | grep -Ex "$refused" || true
}
emulation() { case $1 in rv32) echo '-m elf32lriscv' ;; esac; }

planted() { # planted <machine> <what> <C++>: that the check sees it
  flags=$(sed -n 's/^CMAKE_CXX_FLAGS:STRING=//p' "$build/$1/CMakeCache.txt")
  printf '%s\n' "$3" | "$(tool "$1")g++" $flags -O2 -fno-exceptions -x c++ -c - -o "$build/planted.o"
  if [ -z "$(needs "$1" "$build/planted.o")" ]; then
    fail "$1: the check of the library's part does not see $2"
  fi
}

planted_deeper() { # that the second question is asked too: the list has been told that malloc is well
  wrong=$(
    allowed=malloc
    flags=$(sed -n 's/^CMAKE_CXX_FLAGS:STRING=//p' "$build/$1/CMakeCache.txt")
    printf '%s\n' 'extern "C" void* malloc(unsigned); void* f() { return malloc(8); }' |
      "$(tool "$1")g++" $flags -O2 -x c++ -c - -o "$build/planted.o"
    needs "$1" "$build/planted.o"
  )
  case " $(echo $wrong) " in
    *' malloc '*) ;;
    *) fail "$1: the check of what the library's part becomes when linked does not see malloc" ;;
  esac
}

for machine in $machines; do
  objects=
  for part in tick decide decide_example; do
    objects="$objects $build/$machine/CMakeFiles/firmware.dir/$part.cpp.obj"
  done
  wrong=$(needs "$machine" $objects)
  if [ -n "$wrong" ]; then
    fail "$machine: the library's part needs" $wrong
  fi
  planted_deeper "$machine"
  planted "$machine" malloc 'extern "C" void* malloc(unsigned); void* f() { return malloc(8); }'
  planted "$machine" free 'extern "C" void free(void*); void f(void* p) { free(p); }'
  planted "$machine" 'operator new' 'int* f() { return new int(1); }'
  planted "$machine" snprintf 'extern "C" int snprintf(char*, unsigned, char const*, ...); int f(char* p) { return snprintf(p, 9, "%d", 1); }'
  planted "$machine" atan2f 'float f(float y, float x) { return __builtin_atan2f(y, x); }'
  planted "$machine" fmodf 'extern "C" float fmodf(float, float); float f(float x) { return fmodf(x, 2.0F); }'
  planted "$machine" 'arithmetic in double' 'float f(float x) { return x * 0.1; }'
  planted "$machine" 'a guarded static' 'struct A { A(); ~A(); }; A& f() { static A a; return a; }'
done
echo "the library's part: no heap, no printing, no exceptions, no double precision, no library function but sqrtf"

# --- The table. ------------------------------------------------------------------------------------------------------------

bytes_of() { # bytes_of <machine> <part>: code and constants of one object, by symbol; and that it has no variables
  "$(tool "$1")nm" -S -t d "$build/$1/CMakeFiles/firmware.dir/$2.cpp.obj" | awk '
    NF == 4 && $3 ~ /[bBdDsSgG]/ { print "a variable: " $4 >"/dev/stderr"; exit bad = 1 }
    NF == 4 { bytes += $2 }
    END { if (bad) exit 1; print bytes }'
}

largest_frame() { # of the functions in one object, by -fstack-usage
  awk -F '\t' '$2 > most { most = $2 } END { print most + 0 }' "$build/$1/CMakeFiles/firmware.dir/$2.cpp.su"
}

for machine in $machines; do
  for part in tick decide decide_example; do
    bytes=$(bytes_of "$machine" $part) || { fail "$machine: the library's part has a variable"; bytes=0; }
    echo "flash $part $bytes"
    echo "frame $part $(largest_frame "$machine" $part)"
  done >"$build/$machine.bytes"
done

# One row of the table from the lines of each machine. An instruction is one that QEMU executes; the empty function, which
# is taken off, has one itself, its return.
rows=$build/rows
awk -v machines="$machines" '
  function machine_of(path) { sub(/.*\//, "", path); sub(/[.][a-z]*$/, "", path); return path }
  FNR == 1 { machine = machine_of(FILENAME) }
  $1 == "count" && $2 == "nothing" { empty[machine, $3] = $4 / $5 - 1 }
  $1 == "count" { count[machine, $2, $3] = $4 / $5 - ($2 == "worst_tick" ? 0 : empty[machine, $3]) }
  $1 == "stack" || $1 == "bytes" || $1 == "flash" || $1 == "frame" { other[machine, $1, $2] = $3 }
  function row(name, kind, what, unit,   i) {
    printf "| %s |", name
    for (i = 1; i <= n; ++i) printf " %d |", kind == "count" ? count[m[i], what, unit] + 0.5 : other[m[i], kind, what]
    print ""
  }
  function slope(machine, what) { return (count[machine, what, 32] - count[machine, what, 1]) / 31 }
  function of(what, two,   i) {
    for (i = 1; i <= n; ++i) printf " %.2f |", count[m[i], "wend", 8] / count[m[i], two, 8]
    print ""
  }
  function line(name, what,   i, b) {
    printf "| %s |", name
    for (i = 1; i <= n; ++i) { b = slope(m[i], what); printf " %.0f + %.1f n |", count[m[i], what, 1] - b, b }
    print ""
  }
  END {
    n = split(machines, m, " ")
    split("1 4 8 16 32", discs, " ")
    for (i = 1; i <= 5; ++i) {
      k = discs[i] (i == 1 ? " disc: " : " discs: ")
      row(k "composed", "count", "wend", discs[i])
      row(k "by hand", "count", "by_hand", discs[i])
      row(k "by hand, plainly", "count", "by_hand_plain", discs[i])
      row(k "textbook", "count", "textbook", discs[i])
    }
    line("n discs: composed", "wend")
    line("n discs: by hand", "by_hand")
    line("n discs: by hand, plainly", "by_hand_plain")
    printf "| 8 discs: composed / by hand |"; of("wend", "by_hand")
    printf "| 8 discs: composed / by hand, plainly |"; of("wend", "by_hand_plain")
    printf "| 8 discs: composed / textbook |"; of("wend", "textbook")
    row("8 discs: policy of the run", "count", "example", 8)
    row("whole tick of the run, the worst one", "count", "worst_tick", 0)
    row("flash, bytes: decision, composed", "flash", "decide")
    row("flash, bytes: policy of the run", "flash", "decide_example")
    row("flash, bytes: whole tick of the run", "flash", "tick")
    row("memory, bytes: decision, composed", "bytes", "memory_wend")
    row("memory, bytes: decision, by hand", "bytes", "memory_by_hand")
    row("memory, bytes: policy of the run", "bytes", "memory_example")
    row("memory, bytes: whole tick of the run", "bytes", "memory_tick")
    row("stack, bytes: decision, composed", "stack", "wend")
    row("stack, bytes: decision, by hand", "stack", "by_hand")
    row("stack, bytes: decision, textbook", "stack", "textbook")
    row("stack, bytes: policy of the run", "stack", "example")
    row("stack, bytes: whole tick of the run", "stack", "tick")
    row("stack, bytes: its largest frame", "frame", "tick")
  }' $(for machine in $machines; do echo "$build/$machine.out" "$build/$machine.bytes"; done) >"$rows"

{
  ticks=$(grep -c ^command "$build/$reference.out")
  cat <<END
## On a microcontroller

\`examples/firmware\` is a whole program without an operating system, with a start-up and a linker script of its own: 24 rangers, the composed policy and a
differential drive at a fixed tick of 50 ms. \`sh cmake/firmware.sh\` installs what is missing, builds it for an Arm Cortex-M4F, a Cortex-M3 (no floating-point unit) and a 32-bit
RISC-V (RV32IMAFC), and runs it under QEMU on a recorded run of $ticks ticks that is compiled in.

**The same bits.** All three, and g++ and clang++ on x86-64 with \`-O0\`, \`-O2\`, \`-O3\` and \`-march=x86-64-v3\`, print the same commands, bit for bit, on every tick. It takes
\`-ffp-contract=off\`: without it a compiler may fuse a * b + c into one rounding where the processor can, and only there. \`-ffast-math\` reorders sums and loses it. x87 arithmetic (32-bit x86
without SSE) rounds in another width. \`-fno-math-errno\` changes no bit; it keeps a branch to the C library away from each square root.

**No heap, no surprises.** The library's part is linked by itself and asked for its symbols: sqrtf and copying, and without a floating-point unit the single-precision helpers of the compiler's library; nothing
that allocates, prints, throws, or calculates in double precision. No variables: all that changes is in the memory struct.

**Counted.** Instructions from the first of a function to its return, as QEMU executes them (\`-O2\`; not cycles: a root or a quotient counts as one, or, without a floating-point unit, as all that its routine takes). The decision is that of
\`bench/by_hand.h\` (past the nearest disc when near, else a blend of away and to the goal), from given discs to a course, look included: composed, by hand in C (which keeps the way to the
nearest disc from the search, as \`look\` does; plainly: which works it out again), and in the textbooks' form with atan2f, sinf and cosf (\`bench/textbook.h\`); mean over 1024 ticks of 32 drives, the same for all. n discs: a + b n, from 1 and
32. Stack is painted, the deepest on any tick. Flash is code and constants of the library's part, without the compiler's library.

| | Cortex-M4F | Cortex-M3 | RV32IMAFC |
|---|---:|---:|---:|
END
  cat "$rows"
} >"$build/section.md"
cat "$rows"

begin='<!-- made by cmake/firmware.sh: begin -->'
end='<!-- made by cmake/firmware.sh: end -->'
if ! grep -qxF "$begin" README.md || ! grep -qxF "$end" README.md; then
  fail "README.md has no two lines $begin and $end"
elif [ $check = yes ]; then
  awk -v begin="$begin" -v end="$end" '$0 == end { inside = 0 } inside { print } $0 == begin { inside = 1 }' README.md >"$build/in_readme.md"
  # Figures within 2 %, and everything else letter by letter.
  awk '
    function words(text, list) { gsub(/\|/, " | ", text); return split(text, list, /[ ]+/) }
    NR == FNR { line[FNR] = $0; lines = FNR; next }
    {
      n = words($0, now); k = words(line[FNR], was)
      same = n == k
      for (i = 1; i <= n && same; ++i)
        if (now[i] != was[i])
          same = now[i] ~ /^[0-9.]+$/ && was[i] ~ /^[0-9.]+$/ && now[i] <= 1.02 * was[i] && now[i] >= 0.98 * was[i]
      if (!same) { print "README.md says: " line[FNR]; print "it should be:   " $0; bad = 1 }
    }
    END { if (FNR != lines) { print "README.md has " lines " lines, it should be " FNR; bad = 1 } exit bad }
  ' "$build/in_readme.md" "$build/section.md" || fail 'the README is off; run sh cmake/firmware.sh'
else
  awk -v begin="$begin" -v end="$end" -v section="$build/section.md" '
    $0 == end { inside = 0 }
    !inside { print }
    $0 == begin { inside = 1; while ((getline text <section) > 0) print text }' README.md >"$build/README.md"
  cat "$build/README.md" >README.md
  echo 'firmware: README.md is up to date'
fi
exit $failed
