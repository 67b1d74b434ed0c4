#!/bin/sh
# cmake/mutants.sh - would the tests notice? Changes the robot side in one place at a time (a comparison, a sign, a
# constant, a logical operator, the order of select's two answers), builds the nearest tests against the change, and
# counts how many changes they notice. Prints each survivor as it is found (file:line: before -> after, on stderr), and a
# score.
#
#   sh cmake/mutants.sh                        100 changes, drawn evenly from all
#   sh cmake/mutants.sh --sample 400 --seed 2  others, and more of them
#   sh cmake/mutants.sh --all include/wend/fields/past_disc.hpp
#
# Nearest: the test that mirrors the header, those that include it, smallest first, then its neighbours and the loop's; at
# most WEND_NEAREST (default 8).
# A change that does not compile, or is known to change nothing (cmake/mutants.keep), is not counted. It takes a core about
# ten seconds a change; all cores are used.
set -eu
case $0 in */*) cd "${0%/*}/.." ;; *) cd .. ;; esac

sample=100
seed=1
while [ $# -gt 0 ]; do
  case $1 in
    --sample) sample=$2 && shift 2 ;;
    --seed) seed=$2 && shift 2 ;;
    --all) sample=0 && shift ;;
    -*)
      echo "usage: mutants.sh [--sample N | --all] [--seed S] [HEADER...]" >&2
      exit 2
      ;;
    *) break ;;
  esac
done
[ $# -gt 0 ] || set -- $(find include/wend -name '*.hpp' ! -path 'include/wend/lab/*' | sort)

cxx=${CXX:-g++}
jobs=$(getconf _NPROCESSORS_ONLN)
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
trap 'exit 2' HUP INT TERM

# --- Every change there is: file, line, column, length, what stands there instead. ------------------------------------

list() {
  awk '
    function emit(at, size, instead) {
      printf "%s\t%d\t%d\t%d\t%s\n", FILENAME, FNR, at, size, instead
    }
    function each(text, token, instead,    from, at) {
      from = 1
      while ((at = index(substr(text, from), token)) > 0) {
        emit(from + at - 1, length(token), instead)
        from += at + length(token) - 1
      }
    }
    BEGIN {
      count = 0
      add(" < ", " >= "); add(" > ", " <= "); add(" <= ", " > "); add(" >= ", " < ")
      add(" + ", " - "); add(" - ", " + "); add(" * ", " / "); add(" / ", " * ")
      add(" += ", " -= "); add(" -= ", " += ")
      add(" && ", " || "); add(" || ", " && "); add(" == ", " != "); add(" != ", " == ")
      add("(-", "("); add("{-", "{"); add("(!", "("); add("= !", "= ")
      add("(0.0F)", "(1.0F)"); add("(1.0F)", "(0.0F)"); add("(0.5F)", "(0.75F)"); add("(2.0F)", "(1.5F)")
      add("least(", "greatest("); add("greatest(", "least("); add(" true", " false"); add(" false", " true")
      add("++", "--")
    }
    function add(token, instead) { ++count; tokens[count] = token; others[count] = instead }
    /^[[:space:]]*(\/\/|#|static_assert|WEND_ASSERT|template|using|requires)/ { next }
    /static_assert|WEND_ASSERT|operator/ { next }
    {
      text = $0
      sub(/\/\/.*/, "", text)
      for (k = 1; k <= count; ++k) each(text, tokens[k], others[k])
      # select(mask, a, b) on one line: a and b change places.
      if (match(text, /select\([^(),]*(\([^()]*\))?[^(),]*, [^(),]+(\([^()]*\))?, [^(),]+(\([^()]*\))?\)/)) {
        call = substr(text, RSTART, RLENGTH)
        from = RSTART
        depth = 0; parts = 1; delete part
        for (i = 8; i < length(call); ++i) {
          c = substr(call, i, 1)
          if (c == "(") ++depth
          if (c == ")") --depth
          if (c == "," && depth == 0) { ++parts; continue }
          part[parts] = part[parts] c
        }
        if (parts == 3) emit(from, length(call), "select(" part[1] "," part[3] "," part[2] ")")
      }
    }' "$@"
}
list "$@" >"$work/all"
if [ -f cmake/mutants.keep ]; then # changes that are known to change nothing, with the reason
  grep -v '^#' cmake/mutants.keep | cut -f 1-2 >"$work/known" || true
else
  : >"$work/known"
fi
total=$(wc -l <"$work/all")
if [ "$sample" -gt 0 ] && [ "$sample" -lt "$total" ]; then
  awk -v seed="$seed" 'BEGIN { srand(seed) } { printf "%.9f\t%s\n", rand(), $0 }' "$work/all" | sort | head -n "$sample" |
    cut -f 2- >"$work/chosen"
else
  cp "$work/all" "$work/chosen"
fi
echo "mutants: $(wc -l <"$work/chosen") of $total changes"

# --- The tests, as quick to build as they get: what all include is compiled once. -------------------------------------

flags="-std=c++20 -O0 -w -ffp-contract=off -fno-math-errno -isystem /usr/include/eigen3"
flags="$flags -DWEND_TEST_DATA=\"$PWD/tests/data\""
printf '#include <Eigen/Core>\n#include <doctest/doctest.h>\n' >"$work/common.hpp"
$cxx $flags -x c++-header "$work/common.hpp" -o "$work/common.hpp.gch"
$cxx $flags -c tests/main.cpp -o "$work/main.o"

nearest() { # nearest <header>: test sources
  mirror=tests/${1#include/wend/}
  mirror=${mirror%.hpp}_test.cpp
  {
    [ ! -f "$mirror" ] || echo "$mirror"
    grep -rl --include='*_test.cpp' "\"${1#include/}\"" tests | xargs -r ls -Sr 2>/dev/null
    case $1 in
      include/wend/fields/* | include/wend/arbiters/*) echo tests/field_test.cpp ;;
      include/wend/*/*) ls -Sr "$(dirname "$mirror")"/*_test.cpp ;;
      *) echo tests/percept_test.cpp tests/field_test.cpp | tr ' ' '\n' ;;
    esac
    echo tests/loop_test.cpp
  } | grep -v -e fuzz/ -e guests_test -e on_every_number | awk '!seen[$0]++' | head -n "${WEND_NEAREST:-8}"
}

try() { # try <place> <a line of the list>: "killed", "survived" or "broken"
  dir=$work/try.$1
  rm -rf "$dir"
  mkdir -p "$dir"
  file=$(printf '%s' "$2" | cut -f 1)
  cp -r include "$dir/include"
  printf '%s\n' "$2" >"$dir/change"
  awk -F '\t' 'NR == FNR { line = $2; at = $3; size = $4; instead = $5; next }
    FNR == line { $0 = substr($0, 1, at - 1) instead substr($0, at + size) } { print }' "$dir/change" "$file" \
    >"$dir/$file"
  verdict=broken
  for test in $(nearest "$file"); do
    if ! $cxx $flags -include "$work/common.hpp" -I "$dir/include" -I tests -I "$(dirname "$test")" -c "$test" \
      -o "$dir/test.o" 2>/dev/null; then
      continue
    fi
    $cxx "$dir/test.o" "$work/field_checks.o" "$work/dense.o" "$work/main.o" -o "$dir/test" -pthread 2>/dev/null || continue
    verdict=survived
    if ! timeout 60 "$dir/test" >/dev/null 2>&1; then
      verdict=killed
      break
    fi
  done
  before=$(sed -n "$(printf '%s' "$2" | cut -f 2)p" "$file" | sed 's/^ *//')
  after=$(sed -n "$(printf '%s' "$2" | cut -f 2)p" "$dir/$file" | sed 's/^ *//')
  if [ $verdict = survived ] && grep -qxF "$(printf '%s\t%s' "$file" "$after")" "$work/known"; then
    verdict=same
  fi
  [ $verdict != survived ] || echo "$file:$(printf '%s' "$2" | cut -f 2): $before  ->  $after" >&2
  printf '%s\t%s:%s: %s  ->  %s\n' $verdict "$file" "$(printf '%s' "$2" | cut -f 2)" "$before" "$after"
  rm -rf "$dir"
}

for support in field_checks dense; do
  $cxx $flags -include "$work/common.hpp" -I include -I tests -c tests/$support.cpp -o "$work/$support.o"
done

worker() { # worker <k>: every jobs-th change
  awk -v k="$1" -v jobs="$jobs" 'NR % jobs == k' "$work/chosen" >"$work/mine.$1"
  while IFS= read -r change; do
    try "$1" "$change" >>"$work/results.$1"
  done <"$work/mine.$1"
}
k=0
while [ $k -lt "$jobs" ]; do
  : >"$work/results.$k"
  worker $k &
  k=$((k + 1))
done
wait

cat "$work"/results.* | sort >"$work/results"
count() { grep -c "^$1" "$work/results" || true; }
killed=$(count killed)
survived=$(count survived)
awk -v killed="$killed" -v survived="$survived" -v same="$(count same)" -v broken="$(count broken)" 'BEGIN {
  tried = killed + survived
  printf "mutants: %d noticed, %d survived: %.1f %%; %d known to change nothing, %d do not compile\n", killed, survived,
    tried == 0 ? 0 : 100 * killed / tried, same, broken
}'
