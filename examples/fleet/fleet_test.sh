#!/bin/sh
# examples/fleet/fleet_test.sh FLEET DATA [MPIRUN] - parts of a campaign, however started, broken and mended, against one
# process. FLEET: the built program; DATA: tests/data. One line a check; exit 1 when one failed.
set -u
if [ $# -lt 2 ] || [ ! -x "$1" ] || [ ! -f "$2/spruces.csv" ]; then
  echo "usage: fleet_test.sh FLEET DATA [MPIRUN]" >&2
  exit 2
fi
fleet=$(cd "$(dirname "$1")" && pwd)/$(basename "$1")
data=$(cd "$2" && pwd)
mpirun=${3:-}
work=$(mktemp -d) || exit 2
trap 'rm -rf "$work"' EXIT
trap 'exit 2' HUP INT TERM
cd "$work" || exit 2
failed=0

check() {  # check <what holds> <command...>
  what=$1
  shift
  if "$@"; then
    echo "ok: $what"
  else
    echo "FAILED: $what"
    failed=1
  fi
}
run() {  # leaves the exit code in $code, the output in ./stdout and ./stderr
  "$@" >stdout 2>stderr </dev/null
  code=$?
}
says() { grep -qF -- "$1" stderr; }
prints() { grep -qF -- "$1" stdout; }
same() { cmp -s "$1" "$2"; }
ended() { [ "$code" -eq "$1" ]; }

runs=420
whole=one/shard-1-of-1.rows
run "$fleet" --runs $runs --threads 1 --out one
check 'one process drives all runs' ended 0
check 'it says how sure one may be' prints 'contact, one-sided: no more than'
run "$fleet" --runs $runs --threads 2 --out two
check 'two threads write the same bytes' same $whole two/shard-1-of-1.rows

i=1
while [ $i -le 7 ]; do
  "$fleet" --runs $runs --shard $i/7 --threads 1 --out seven >/dev/null
  i=$((i + 1))
done
run "$fleet" --runs $runs --out seven-merged --merge seven/*.rows
check 'seven shards are merged' ended 0
check 'they give the same bytes' same $whole seven-merged/shard-1-of-1.rows

rm seven/shard-2-of-7.rows
head -c 5000 seven/shard-6-of-7.rows >cut && mv cut seven/shard-6-of-7.rows
run "$fleet" --runs $runs --out broken --merge seven/*.rows
check 'a merge of what is not whole fails' ended 1
check 'it names the shard that is missing' says 'missing: shard 2/7'
check 'and the file that was cut off' says 'damaged: seven/shard-6-of-7.rows'
check 'and what to run again' says 'run again: --shard 6/7'
check 'and writes nothing' test ! -e broken/shard-1-of-1.rows
i=1
while [ $i -le 7 ]; do
  run "$fleet" --runs $runs --shard $i/7 --out seven
  case $i in
    2 | 6) check "shard $i is run again" prints 'seven/shard-' ;;
    *) check "shard $i is not run again" prints 'is there and whole' ;;
  esac
  i=$((i + 1))
done
run "$fleet" --runs $runs --out mended --merge seven/*.rows
check 'what was run again mends the whole' same $whole mended/shard-1-of-1.rows
run "$fleet" --runs $runs --seed 2 --merge seven/*.rows
check 'shards of another seed are foreign' says 'foreign: seven/shard-1-of-7.rows is of another campaign'

run "$fleet" --run 17 --out alone
check 'a run is driven again alone' test -s alone/run-17.csv
time_in_row=$(sed -n 's/^17,[^,]*,[^,]*,[^,]*,[^,]*,\([0-9]*\.[0-9][0-9]\).*/\1/p' $whole)
check 'in the time of its row' prints "after $time_in_row"

"$fleet" --runs 100000000 --threads 1 --out stopped >stdout 2>stderr &
child=$!
sleep 2
kill -INT $child
wait $child
code=$?
check 'an interrupt ends a campaign' ended 130
check 'it is told, and no bar is drawn where there is no terminal' test "$(grep -c . stderr)" -eq 1
if command -v script >/dev/null; then
  script -qec "timeout --foreground -s INT 3 '$fleet' --runs 100000000 --threads 1 --out bar" /dev/null \
    >stdout 2>stderr </dev/null
  check 'on a terminal a bar shows how far it is' prints 'shard 1/1 ['
fi
run "$fleet" --runs 100000000 --merge stopped/*.rows
check 'what was done so far is there, and known to be a part' says 'stopped: shard 1/1'
check 'it is counted' prints 'arrived'

"$fleet" --runs 100000000 --threads 1 --shard 1/2 --out killed >/dev/null 2>&1 &
child=$!
sleep 1
kill -KILL $child
wait $child 2>/dev/null
run "$fleet" --runs 100000000 --merge killed/shard-1-of-2.rows
check 'of a shard that was killed nothing is taken for whole' ended 1
check 'and that is said' says 'killed/shard-1-of-2.rows'

(
  trap '' XFSZ
  ulimit -f 8
  "$fleet" --runs $runs --out full >/dev/null 2>stderr
)
check 'a full disk is told' says 'could not write'
check 'and leaves nothing behind' test -z "$(ls full)"

run "$fleet" --map "$data/spruces.csv" --runs 20 --out stand
check 'a stand of trees is crossed' prints ' of 20: 100.000 %'
run "$fleet" --shard 8/7
check 'a shard that is none is refused' ended 2
run "$fleet" --runs none
check 'a number that is none is refused' says "--runs expects a whole number from 1, found 'none'"

if [ -n "$mpirun" ]; then
  # As root only where it has to be, as in a container.
  as_root=
  [ "$(id -u)" -ne 0 ] || as_root=--allow-run-as-root
  run "$mpirun" $as_root --oversubscribe -n 4 "$fleet" --mpi --runs $runs --out ranks
  check 'four ranks drive their shards' ended 0
  run "$fleet" --runs $runs --out ranks-merged --merge ranks/*.rows
  check 'they give the same bytes' same $whole ranks-merged/shard-1-of-1.rows

  # One of three ranks is killed; mpirun then ends the others, which write what they have.
  timeout 60 "$mpirun" $as_root --oversubscribe -n 3 sh -c \
    'if [ "${OMPI_COMM_WORLD_RANK:-${PMI_RANK:-}}" = 1 ]; then "$0" "$@" & child=$!; sleep 2; kill -KILL $child; wait $child; exit 9; fi
     exec "$0" "$@"' "$fleet" --mpi --runs 40000000 --out lost >/dev/null 2>&1
  run "$fleet" --runs 40000000 --merge lost/shard-1-of-3.rows lost/shard-2-of-3.rows lost/shard-3-of-3.rows
  check 'a rank that was killed is seen at the merge' ended 1
  check 'its file is named' says 'damaged: lost/shard-2-of-3.rows'
else
  echo 'left out: MPI is not there'
fi
exit $failed
