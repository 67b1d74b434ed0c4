#!/bin/sh
# cmake/check_layers_bites.sh <scratch folder> - shows that check_layers.sh finds a breach of each rule, and passes a
# tree without one.
set -eu
check=$(cd "${0%/*}" && pwd)/check_layers.sh
status=0

# tree: a small one in good order.
tree() {
  rm -rf "$scratch"
  for folder in fields arbiters lab; do
    mkdir -p "$scratch/include/wend/$folder"
  done
  cd "$scratch"
  echo '#include <Eigen/Core>' >include/wend/plane.hpp
  printf '#include "wend/plane.hpp"\nint cosine;  // of no cos(x)\n' >include/wend/fields/a.hpp
  echo '#include <vector>' >include/wend/lab/b.hpp
}

# breach <file> <line>: the check fails on it, and names the file.
breach() {
  tree
  echo "$2" >>"$1"
  if found=$(sh "$check" .); then
    echo "not found: $2 in $1"
    status=1
  elif ! echo "$found" | grep -q "$1"; then
    echo "found, but not where it is: $2 in $1"
    status=1
  fi
}

scratch=$1
mkdir -p "$scratch"
scratch=$(cd "$scratch" && pwd)

tree
if ! sh "$check" .; then
  echo 'a tree in good order does not pass'
  status=1
fi
breach include/wend/plane.hpp '#include "wend/lab/b.hpp"'
breach include/wend/fields/a.hpp '#include "wend/lab/b.hpp"'
breach include/wend/plane.hpp '#include "wend/fields/a.hpp"'
breach include/wend/fields/a.hpp '#include "wend/arbiters/c.hpp"'
breach include/wend/arbiters/c.hpp '#include "wend/fields/a.hpp"'
breach include/wend/plane.hpp '#  include <vector>'
breach include/wend/plane.hpp '#include <Eigen/Geometry>'
breach include/wend/lab/b.hpp '#include "b_parts.hpp"'
breach include/wend/fields/a.hpp 'auto x = std::sin(y);'
breach include/wend/arbiters/c.hpp 'auto x = atan2f (y, z);'
breach include/wend/plane.hpp 'template <typename T> void f(T) { throw 1; }'
breach include/wend/lab/b.hpp "$(yes x | head -n 400)"
if command -v git >/dev/null; then
  tree
  git init -q .
  echo x >notes.txt
  if sh "$check" . >/dev/null; then
    echo 'not found: a stray file at the top level'
    status=1
  fi
fi

exit $status
