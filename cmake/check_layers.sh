#!/bin/sh
# cmake/check_layers.sh [project folder] - the rules of the source tree that a compiler does not check. Prints each
# breach as file:line:text and fails when there is one.
set -eu
cd "${1:-.}"

report() {  # report <rule>: what comes in breaks it
  breaches=$(cat)
  [ -z "$breaches" ] || printf 'layers: %s\n%s\n' "$1" "$breaches"
}

# in_code <pattern> <files>: where the code, not a comment, matches.
in_code() {
  pattern=$1
  shift
  for file in "$@"; do
    sed 's://.*::' "$file" | grep -nE "$pattern" | sed "s|^|$file:|" || true
  done
}

robot_side=$(find include/wend -name '*.hpp' ! -path 'include/wend/lab/*' | sort)
if [ -z "$robot_side" ]; then
  echo "layers: no header in $PWD/include/wend"
  exit 1
fi
base=$(find include/wend -maxdepth 1 -name '*.hpp' ! -name wend.hpp ! -name loop.hpp | sort)
siblings='fields arbiters sensing motion watch'
include='^[[:space:]]*#[[:space:]]*include[[:space:]]*'

headers() {
  in_code "$include\"wend/lab/" $robot_side | report 'the robot side includes lab/'

  hosted='iostream|istream|ostream|fstream|sstream|iomanip|vector|string|deque|list|map|set|unordered_map|unordered_set'
  hosted="$hosted|functional|memory|thread|mutex|future|filesystem|regex|any|stdexcept|typeinfo"
  in_code "$include<($hosted)>" $robot_side | report 'the robot side includes a hosted header'

  in_code "$include<Eigen/" $robot_side | { grep -v '<Eigen/Core>' || true; } |
    report 'the robot side includes more of Eigen than Core'

  in_code "$include\"" $(find include/wend -name '*.hpp' | sort) | { grep -v '"wend/' || true; } |
    report 'an include of ours does not start with "wend/"'

  for folder in $siblings; do
    others=$(echo "$siblings" | sed "s/$folder//; s/^ *//; s/ *\$//; s/  */|/g")
    for file in $(find "include/wend/$folder" -name '*.hpp' 2>/dev/null | sort); do
      in_code "$include\"wend/($others|loop\\.hpp|wend\\.hpp)" "$file"
    done | report "$folder/ includes a sibling or what lies above"
  done

  in_code "$include\"wend/($(echo "$siblings" | tr ' ' '|')|loop\\.hpp|wend\\.hpp)" $base |
    report 'a header of the base includes what lies above'

  in_code '(^|[^[:alnum:]_])(a?(sin|cos|tan)h?|atan2|sincos)[fl]?[[:space:]]*\(' \
    $(find include/wend/fields include/wend/arbiters -name '*.hpp' 2>/dev/null | sort) |
    report 'trigonometry in fields/ or arbiters/'

  # g++ lets these pass in a template that nothing instantiates, even with -fno-exceptions -fno-rtti.
  in_code '(^|[^[:alnum:]_])(throw([^[:alnum:]_]|$)|try[[:space:]]*\{|typeid[[:space:]]*\(|dynamic_cast[[:space:]]*<)' \
    $robot_side | report 'the robot side uses exceptions or RTTI'

  for file in $(find include/wend -name '*.hpp' | sort); do
    lines=$(($(wc -l <"$file")))
    [ "$lines" -le 400 ] || echo "$file: $lines lines"
  done | report 'a header is longer than 400 lines'
}

top_level() {
  entries=$(git ls-files --cached --others --exclude-standard) || return 1
  echo "$entries" | cut -d / -f 1 | sort -u |
    { grep -vxE '\..*|CMakeLists\.txt|README\.md|DEVELOPERS\.md|LICENSE|include|examples|tests|bench|cmake' || true; } |
    report 'a top-level entry is not part of the layout'
}

found=$(headers)
if [ -e .git ] && command -v git >/dev/null; then
  found=$found$(top_level)
else
  echo 'layers: the top level is not checked outside a git checkout'
fi
if [ -n "$found" ]; then
  echo "$found"
  exit 1
fi
