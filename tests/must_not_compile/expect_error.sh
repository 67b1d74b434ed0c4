#!/bin/sh
# expect_error.sh SOURCE COMPILER OPTIONS... - compiles SOURCE, which must fail with the sentence of its first line; and
# compiles it again with -DMENDED, which must pass, so that it fails for that mistake and for nothing else.
set -u
source=$1
shift
sentence=$(sed -n '1s|^// expects: ||p' "$source")
[ -n "$sentence" ] || { echo "$source: the first line has to be '// expects: ' and a sentence"; exit 1; }
if ! "$@" -DMENDED "$source"; then
  echo "$source does not compile even when it is mended"
  exit 1
fi
if said=$("$@" "$source" 2>&1); then
  echo "$source compiles, and must not"
  exit 1
fi
first=$(printf '%s\n' "$said" | awk '/error:/ && ++errors > 1 { exit } errors')
case $first in
  *"$sentence"*) ;;
  *)
    printf 'expected as the first error: %s\nfound: %s\n' "$sentence" "$first"
    exit 1
    ;;
esac
