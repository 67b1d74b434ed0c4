#!/bin/sh
# readme_test.sh SOURCE BUILD COMPILER EIGEN - holds README.md to the code: every block of C++ in it compiles or is the file it
# says it is, every printed output is what its program prints, the page and picture of that are what they have to be, and
# every name of ours that it mentions exists.
#
# A comment on the line above a block says how it is checked:
#   <!-- same as FILE -->              the block is that file, but for the comment at its top
#   <!-- compiles -->                  by itself, after #include <wend/wend.hpp>
#   <!-- compiles in FILE -->          in place of that file's line "// HERE"
#   <!-- compiles and runs -->         a shell line that builds ./a.out, which has to run
#   <!-- printed by PROGRAM ARGS -->   what the built example prints, whole
#   <!-- excerpt of PROGRAM ARGS -->   lines that it prints, in this order
#   <!-- shown only: WHY -->           not checked, and why not
set -eu
source=$1 build=$2 cxx=$3 eigen=$4
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
trap 'exit 2' HUP INT TERM
cd "$source"
failed=0

fail() {
  echo "FAILED: $*"
  failed=1
}

strict='-std=c++20 -fsyntax-only -Wall -Wextra -Wpedantic -Wconversion -Wsign-conversion -Wshadow -Wdouble-promotion -Wold-style-cast'
compiles() { # compiles <source> <what>
  if "$cxx" $strict -Werror -I include -I . -isystem "$eigen" "$1" >"$work/log" 2>&1; then
    echo "ok: $2 compiles"
  else
    head -n 20 "$work/log"
    fail "$2 does not compile"
  fi
}

# --- Blocks: their texts in $work/block.N, a line each in $work/blocks: number, line, language, how it is checked. --------

awk -v work="$work" '
  /^[[:space:]]*```/ {
    if (inside) { inside = 0; close(file); next }
    inside = 1; ++n
    file = work "/block." n
    printf "" >file
    language = $0; sub(/^[[:space:]]*```/, "", language)
    printf "%d %d %s %s\n", n, NR, language == "" ? "-" : language, how >(work "/blocks")
    how = ""
    next
  }
  inside { print >file; next }
  /^<!-- .* -->$/ { how = substr($0, 6, length($0) - 9); next }
  /[^[:space:]]/ { how = "" }
' README.md
[ -s "$work/blocks" ] || { echo 'FAILED: README.md has no block at all'; exit 1; }

while read -r number line language how; do
  block=$work/block.$number
  what="README.md:$line"
  case $how in
    'same as '*)
      sed '1,/^[^/]/ { /^\/\//d; }' "${how#same as }" >"$work/file" # without the comment at its top
      if cmp -s "$block" "$work/file"; then 
        echo "ok: $what is ${how#same as }"
      else
        fail "$what differs from ${how#same as }"
      fi
      ;;
    compiles)
      { echo '#include <wend/wend.hpp>'; cat "$block"; } >"$work/block.cpp"
      compiles "$work/block.cpp" "$what"
      ;;
    'compiles in '*)
      awk -v block="$block" '/^ *\/\/ HERE$/ { while ((getline text < block) > 0) print text; next } { print }' \
        "${how#compiles in }" >"$work/block.cpp"
      compiles "$work/block.cpp" "$what"
      ;;
    'compiles and runs')
      if (sed "s|/usr/include/eigen3|$eigen|; s|\$| -o $work/a.out|" "$block" | sh && "$work/a.out" >/dev/null); then
        echo "ok: $what builds a program that runs"
      else
        fail "$what does not build a program that runs"
      fi
      ;;
    'printed by '* | 'excerpt of '*)
      set -- ${how#* * }
      program=$build/examples/$1
      shift
      said=$work/said.$number
      (cd "$work" && "$program" "$@" >"$said" 2>&1) || fail "$what: $program ends with an error"
      case $how in
        printed*) cmp -s "$said" "$block" && echo "ok: $what is what $program prints" ||
          { diff "$block" "$said" | head -n 10; fail "$what is not what $program prints"; } ;;
        *)
          if awk 'NR == FNR { wanted[++n] = $0; next } k < n && $0 == wanted[k + 1] { ++k }
                  END { if (k < n) { print "not printed: " wanted[k + 1]; exit 1 } }' "$block" "$said"; then
            echo "ok: $what is in what $program prints"
          else
            fail "$what is not in what $program prints"
          fi
          ;;
      esac
      ;;
    'shown only: '*) echo "ok: $what is ${how}" ;;
    *) fail "$what: the line above the block has to say how it is checked" ;;
  esac
done <"$work/blocks"

# --- The review that it shows: its four proofs, its page, its picture. -----------------------------------------------------

holds() { # holds <what> <command...>
  what=$1
  shift
  if "$@"; then echo "ok: $what"; else fail "$what"; fi
}
out=$work/review-out
holds 'all four are proved to keep clear' sh -c 'cat "$1"/said.* | sed -n "/^keeps 1.0 cm clear/,/^\$/p" |
  grep -E "^  (hard switch|two thresholds|blend|composed) +holds +[0-9]+ boxes" | { [ "$(wc -l)" -eq 4 ]; }' - "$work"
holds 'the page has four maps' sh -c '[ "$(grep -o "<svg class=\"map\"" "$1" | wc -l)" -eq 4 ]' - "$out/review.html"
holds 'the arrival map is under the run' grep -q 'every path from here ends at the goal' "$out/blend.svg"
holds 'the picture is what review draws' cmp "$out/blend.svg" examples/review/blend.svg

# --- Names: what stands in backticks and looks like one of ours has to be one. --------------------------------------------

awk '/^[[:space:]]*```/ { inside = !inside; next } !inside' README.md | grep -oE '`[^`]+`' | tr -d '`' |
  grep -oE '^(wend::)?(lab::)?[A-Za-z_][A-Za-z0-9_]*(<[^>]*>)?(\(.*\))?$' | sed 's/^wend:://; s/^lab:://; s/[<(].*//' |
  sort -u >"$work/names"
sed 's/#.*//' tests/readme/other_words.txt | tr -s ' \n' '\n' | sort -u >"$work/others"
comm -23 "$work/names" "$work/others" >"$work/ours"
[ -s "$work/ours" ] || fail 'README.md mentions no name of ours'
{
  echo '#include <wend/wend.hpp>'
  (cd include && find wend/lab -name '*.hpp' | sort | sed 's/.*/#include <&>/')
  echo 'namespace check { using namespace wend; using namespace wend::lab; }'
  while read -r name; do
    printf 'namespace { namespace has_%s { using check::%s; } }\n' "$name" "$name"
  done <"$work/ours"
} >"$work/names.cpp"
if "$cxx" -std=c++20 -fsyntax-only -w -I include -isystem "$eigen" "$work/names.cpp" >"$work/log" 2>&1; then
  echo "ok: all $(wc -l <"$work/ours") names exist"
else
  grep 'error:' "$work/log" | head -n 10
  fail 'README.md mentions names that do not exist'
fi
exit $failed
