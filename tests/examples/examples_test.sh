#!/bin/sh
# tests/examples/examples_test.sh PROGRAMS DATA - checks what the built example programs print, write and refuse.
# PROGRAMS: the folder that holds review and replay; DATA: tests/data. One line a check; exit 1 when one failed.
set -u
if [ $# -ne 2 ] || [ ! -x "$1/review" ] || [ ! -x "$1/replay" ] || [ ! -f "$2/spruces.csv" ]; then
  echo "usage: examples_test.sh PROGRAMS DATA" >&2
  exit 2
fi
programs=$(cd "$1" && pwd)
data=$(cd "$2" && pwd)
expected=$(cd "$(dirname "$0")/expected" && pwd)
scenes=$(cd "$(dirname "$0")/../../examples/scenes" && pwd)
work=$(mktemp -d) || exit 2
trap 'rm -rf "$work"' EXIT
trap 'exit 2' HUP INT TERM
cd "$work" || exit 2
failed=0

# check <what holds> <command...>: the command says whether it does.
check() {
  what=$1
  shift
  if "$@"; then
    echo "ok: $what"
  else
    echo "FAILED: $what"
    failed=1
  fi
}

# run <program> <arguments...>: leaves its exit code in $code, its output in ./stdout and ./stderr.
run() {
  program=$1
  shift
  "$programs/$program" "$@" >stdout 2>stderr
  code=$?
}

ended_with() { [ "$code" -eq "$1" ]; }
says() { grep -qF -- "$1" stderr; }
prints() { grep -qE -- "$1" stdout; }
prints_nothing() { [ ! -s stdout ]; }
is_absent() { [ ! -e "$1" ]; }
are_equal() { [ "$1" = "$2" ]; }

# refuses <what> <message> <program> <arguments...>: exit code 2, the message on stderr, nothing on stdout.
refuses() {
  what=$1
  message=$2
  shift 2
  run "$@"
  check "$what: exit code 2" ended_with 2
  check "$what: says '$message'" says "$message"
  check "$what: prints nothing" prints_nothing
}

# --- review: the table, and exactly the files it says. ---------------------------------------------------------------

files='all.svg
blend.csv
blend.svg
composed.csv
composed.svg
hard-switch.csv
hard-switch.svg
review.html
review.json
runs.csv
two-thresholds.csv
two-thresholds.svg'

# With the statements about all states, which take seconds, it is run and looked at by tests/readme/.
run review --out once --runs-only --runs 300 --threads 1
check 'review: exit code 0' ended_with 0
for policy in 'hard switch' 'two thresholds' blend composed; do
  check "review: one row for $policy" are_equal 1 "$(grep -cE "^$policy +(arrived|contact|time out: )" stdout)"
done
check 'review: says where the page is' prints 'The page is once/review.html'
check 'review: writes these files and no others' are_equal "$files" "$(LC_ALL=C ls -A once)"
check 'review: composed arrives' prints '^composed +arrived '

cp stdout first
run review --out twice --runs-only --runs 300 --threads 2
check 'review: the same seed gives the same files, byte for byte' diff -r once twice
sed 's/twice/once/' stdout >second
check 'review: the same seed gives the same table' cmp -s first second
run review --out other --seed 2 --runs-only --runs 300
check 'review: another seed gives other traces' sh -c '! cmp -s once/composed.csv other/composed.csv'
run review --out once --runs-only --runs 300
check 'review: writes over what it wrote' are_equal "$files" "$(LC_ALL=C ls -A once)"

# Each trace: a line of names, then eleven cells on every line, the first at 0 s; the last status is that of the table.
for policy in hard-switch two-thresholds blend composed; do
  check "review: $policy.csv has eleven cells a row, and time goes on" awk -F, '
    NF != 11 { bad = 1 }
    NR == 1 && $1 != "time_s" { bad = 1 }
    NR == 2 && $1 + 0 != 0 { bad = 1 }
    NR > 2 && $1 + 0 <= before + 0 { bad = 1 }
    { before = $1 }
    END { exit bad || NR < 100 }' "once/$policy.csv"
done
# Rounded to 0.1 s in the table; the run ends on the tick that tells the arrival.
check 'review: the time in the table is that of the last row' are_equal \
  "$(awk '/^composed +(arrived|contact|time out)/ { print $3 }' first)" "$(tail -n 1 once/composed.csv | awk -F, '{ printf "%.1f", $1 }')"

# The pictures: a general-purpose parser where there is one.
if command -v xmllint >/dev/null; then
  check 'review: pictures are well-formed' xmllint --noout once/*.svg
else
  echo 'skipped: pictures are not parsed, for want of xmllint'
fi
check 'review: the picture of all has four paths' are_equal 4 "$(grep -c '<polyline' once/all.svg)"
check 'review: the picture of one has one' are_equal 1 "$(grep -c '<polyline' once/blend.svg)"

# Threads change nothing; every drawn run has a row; the JSON is what a general-purpose parser takes.
check 'review: a row for each drawn run of each policy' are_equal 1201 "$(wc -l <once/runs.csv | tr -d ' ')"
check 'review: as many cells as names in every row' awk -F, 'NR == 1 { n = NF } NF != n { bad = 1 } END { exit bad }' once/runs.csv
run review --out json --runs-only --runs 300 --json
check 'review --json: prints what it also writes' cmp -s stdout json/review.json
if command -v python3 >/dev/null; then
  check 'review --json: counts as the rows do' python3 -c '
import csv, json
review = json.load(open("json/review.json"))
rows = list(csv.DictReader(open("json/runs.csv")))
for policy in review["policies"]:
    own = [r for r in rows if r["policy"] == policy["name"]]
    drawn = policy["drawn"]
    assert len(own) == drawn["runs"] == 300
    assert sum(r["ending"] == "arrived" for r in own) == drawn["arrived"]["count"]
    assert abs(min(float(r["least_clearance_m"]) for r in own) - drawn["least_clearance_m"]["least"]) < 1e-4
    low, high = drawn["arrived"]["clopper_pearson"]
    assert low <= drawn["arrived"]["count"] / 300 <= high
pairs = review["pairs"]
assert len(pairs) == 6 and all(p["both"] + p["only_first"] + p["only_second"] + p["neither"] == 300 for p in pairs)'
else
  echo 'skipped: JSON is not parsed, for want of python3'
fi

# --- review: a scene of one's own, and tuning. -----------------------------------------------------------------------

run review --scene "$scenes/seedling-hall.scene" --out hall --runs 200
check 'review --scene: exit code 0' ended_with 0
check 'review --scene: has the title' prints '^A seedling cart crosses the hall of a greenhouse: 12 discs'
check 'review --scene: does not claim a proof among discs that move' prints 'open +not tried: discs move'
check 'review --scene: moves the sprayer on the page' grep -q 'class="mover" data-vx="-0.05' hall/review.html
printf 'wend scene 1\nstart 0 0\ngoal 4 0\ndisc 1 2 0\n' >flat.scene
printf 'wend scene 1\ntitle <b>&"\nstart 0 0\ngoal 4 0\ndisc 2 1.5 0.2\n' >odd.scene
refuses 'a scene with a disc of no size' 'review: flat.scene:4:10: expected RADIUS' review --scene flat.scene --out none
refuses 'a scene that is not there' 'review: absent.scene' review --scene absent.scene --out none
run review --scene odd.scene --out odd --runs-only --runs 20
check 'review --scene: a title is text' sh -c '! grep -q "<b>&" odd/review.html && grep -q "&lt;b&gt;&amp;&quot;" odd/review.html'
if [ -z "${WEND_QUICK:-}" ]; then
  run review --tune --runs 20
  check 'review --tune: exit code 0' ended_with 0
  check 'review --tune: six knobs' are_equal 6 "$(sed -n '/^knob/,/^$/p' stdout | grep -cE '[0-9] to [0-9]')"
  check 'review --tune: tells of unseen runs' prints 'runs that the search has not seen, seed 2'
  cp stdout tuned
  run review --tune --runs 20 --threads 1
  check 'review --tune: the same on one thread' cmp -s stdout tuned
fi
check 'review: interrupted, it says so and leaves a page' sh -c '
  "$1/review" --out cut --runs 100000000 --runs-only >/dev/null 2>cut.err & job=$!
  sleep 2; kill -INT $job; wait $job; [ $? -eq 130 ] && grep -q interrupted cut.err && grep -q "Interrupted." cut/review.html
' sh "$programs"

# --- review: a map of one's own. -------------------------------------------------------------------------------------

run review --map "$data/spruces.csv" --out wood --runs 100
check 'review --map: exit code 0' ended_with 0
check 'review --map: counts the stems' prints '134 discs'
check 'review --map: draws every stem' sh -c '[ "$(grep -o "<circle" wood/blend.svg | wc -l)" -ge 136 ]'
check 'review --map: writes the same files' are_equal "$files" "$(LC_ALL=C ls -A wood)"

printf 'x,y\n1,2\n' >missing.csv
printf 'x,y,diameter\n1,2,0.3\n4,oak,0.2\n' >text.csv
printf 'x,y,diameter\n1,2,0.3\n14.5,5, -0.25\n' >negative.csv
printf 'x,y,diameter\n1,2,0\n' >zero.csv
printf 'x,y,diameter\n1,2\n' >few.csv
printf 'x,y,diameter\n1,2,nan\n' >nan.csv
printf '\nx,y,diameter\n' >rowless.csv
: >empty.csv
refuses 'a map without a column' "review: missing.csv:1:1: expected a column named 'diameter'" \
  review --map missing.csv --out none
refuses 'a map with text in a cell' "review: text.csv:3:3: expected a number for y, found 'oak'" \
  review --map text.csv --out none
refuses 'a map with a negative diameter' 'review: negative.csv:3:9: expected a diameter over 0, found -0.25' \
  review --map negative.csv --out none
refuses 'a map with a diameter of 0' 'review: zero.csv:2:5: expected a diameter over 0, found 0.0' \
  review --map zero.csv --out none
refuses 'a map with too few cells' 'review: few.csv:2:3: expected 3 cells, found 2' review --map few.csv --out none
refuses 'a map with a not-a-number' "review: nan.csv:2:5: expected a number for diameter, found 'nan'" \
  review --map nan.csv --out none
refuses 'a map without a stem' 'review: rowless.csv:3:1: expected at least one stem, found none' \
  review --map rowless.csv --out none
refuses 'an empty map' 'review: empty.csv:1:1: expected a line of column names, found nothing' \
  review --map empty.csv --out none
refuses 'a map that is not there' 'review: nowhere.csv: expected a file that can be read' \
  review --map nowhere.csv --out none
check 'a refused map: nothing is written' is_absent none

# --- review: what it cannot do. --------------------------------------------------------------------------------------

refuses 'review with an unknown option' 'usage: review' review --colour red
refuses 'review with an option without its value' 'usage: review' review --out
refuses 'review with an argument too many' "did not expect 'more'" review more
refuses 'review with a seed that is no number' "--seed expects a whole number from 0, found '1.5'" review --seed 1.5
refuses 'review with a negative seed' "found '-1'" review --seed -1
: >plain
refuses 'review with a file for a folder' 'review: plain: expected a folder' review --out plain
refuses 'review with a folder inside a file' 'review: plain/out: expected a folder' review --out plain/out
check 'refused options: nothing is written' is_absent review-out
run review --help
check 'review --help: usage on stdout, exit code 0' sh -c '[ "$1" -eq 0 ] && grep -q "^usage: review" stdout' - "$code"

# --- The small ones: their output is known, to the letter. -------------------------------------------------------------

for name in quickstart own_field own_guard ranges_to_wheels; do
  run $name
  check "$name: exit code 0" ended_with 0
  check "$name: prints what it has to" cmp -s stdout "$expected/$name.txt"
done
if [ -x "$programs/unit_test" ]; then # where there is doctest
  run unit_test
  check 'unit_test: its tests pass' ended_with 0
  sed -n '/^World/,/^simulate/p' stdout >scene
  check 'unit_test: shows the failing scene as code' cmp -s scene "$expected/unit_test.txt"
fi

# --- compare: every method through the same scenes. -------------------------------------------------------------------

run compare --runs 2
check 'compare: exit code 0' ended_with 0
check 'compare: says nothing on stderr' sh -c '[ ! -s stderr ]'
check 'compare: five scenes' are_equal 5 "$(grep -cE '^(open|disc|trap|passage|crossers): ' stdout)"
check 'compare: goes to the goal where nothing stands' prints '^toward_goal +2/2 +0 +0 +1\.00 +- '
check 'compare: a potential stays in the trap' sh -c 'sed -n "/^trap/,/^passage/p" stdout | grep -qE "^potential_field +0/2 "'
cp stdout first
run compare --runs 2
check 'compare: the same again, byte for byte' cmp -s stdout first
run compare --runs 1 --map "$data/spruces.csv" --markdown
check 'compare --map: a sixth scene' prints '^\*\*trees\*\*: a stand of 134 trees'
refuses 'compare without a run' "--runs expects a whole number from 1 to 10000, found '0'" compare --runs 0
refuses 'compare with a map that is not there' 'compare: nowhere.csv: expected a file that can be read' \
  compare --map nowhere.csv

# --- faults: one after another. ---------------------------------------------------------------------------------------

run faults --runs 3
check 'faults: whatever has to be survived is' ended_with 0
check 'faults: says nothing on stderr' sh -c '[ ! -s stderr ]'
check 'faults: a dead ranger is noticed at once' prints '^all beams dead +blind +0\.0[0-9] +0/3 +0 '
check 'faults: a frozen clock is noticed at once' prints '^clock frozen +stale +0\.0[0-9] +0/3 +0 '
check 'faults: a ranger that sees nothing is driven into things, and it says so' \
  prints '^all beams see nothing +- +- +0/3 +3 \[[0-9]\]'
check 'faults: a watchdog saves what a late tick breaks' prints '^tick late by 20 periods, drive with watchdog +stale.* 0 +[1-9]'
refuses 'faults with runs that are no number' "found 'many'" faults --runs many

# --- replay: one decision a row. -------------------------------------------------------------------------------------

decision='^ *[0-9]+\.[0-9]{3} +[0-9]+ +[0-9]+ '
rows=$(($(wc -l <"$data/spruces-run.csv") - 1))
run replay "$data/spruces-run.csv"
check 'replay: exit code 0' ended_with 0
check 'replay: says nothing on stderr' sh -c '[ ! -s stderr ]'
check 'replay: one decision a row' are_equal "$rows" "$(grep -cE "$decision" stdout)"
check 'replay: counts the rows' prints "^$rows rows, "
statuses='ok|arrived|no course|blind|stale|blocked|stuck|discs dropped'
reasons='past|to the goal|away|away and past|away and to the goal|-'
check 'replay: every row has a status and a reason' are_equal "$rows" \
  "$(grep -E "$decision" stdout | grep -cE " ($statuses) +($reasons)\$")"
cp stdout first
tail -n 2 first >first_end
run replay "$data/spruces-run.csv"
check 'replay: the same again, byte for byte' cmp -s stdout first
run replay --every 10 "$data/spruces-run.csv"
check 'replay --every 10: every tenth row' are_equal $(((rows + 9) / 10)) "$(grep -cE "$decision" stdout)"
tail -n 2 stdout >every_end
check 'replay --every 10: decides on all of them' cmp -s every_end first_end
grep -E "$decision" first | awk 'NR % 10 == 1' >tenths
grep -E "$decision" stdout >every
check 'replay --every 10: the decisions are the same' cmp -s every tenths
run replay --goal 0,0 "$data/spruces-run.csv"
check 'replay --goal: decides otherwise' sh -c '! cmp -s stdout first'

# --- replay: records of its own, and what it cannot read. ------------------------------------------------------------

head8='time_s,x_m,y_m,heading_rad,range_0_m,range_1_m,range_2_m,range_3_m,range_4_m,range_5_m,range_6_m,range_7_m'
printf '%s\n0,0,0,0,,,,,,,,\n0.1,0,0,0,0,0,0,0,0,,,\n0.1,0,0,0,,,,,,,,\n' "$head8" >small.csv
run replay --goal 5,0 small.csv
check 'replay with 8 beams: exit code 0' ended_with 0
check 'replay: nothing in sight is no clearance' prints '^ +0\.000 +0 +0 +- .* ok +to the goal$'
check 'replay: too many broken beams are blind' prints '^ +0\.100 .* blind +-$'
check 'replay: a clock that stands still is stale' prints '^ +0\.100 .* stale +-$'

printf '%s\n0,0,0,0,1,2,oak,4,5,6,7,8\n' "$head8" >text.csv
printf '%s\n0,0,0,0,1,2,3,4,5,6,7\n' "$head8" >few.csv
printf '%s\n0,,0,0,1,2,3,4,5,6,7,8\n' "$head8" >hole.csv
printf '%s\n' "$head8" >rowless.csv
printf 'time_s,x_m,y_m,heading_rad\n0,0,0,0\n' >rangeless.csv
printf 'time_s,x_m,y_m,heading_rad,range_0_m,range_1_m\n0,0,0,0,1,2\n' >two.csv
printf 'time_s,x_m,y_m,heading_rad,range_0_m,range_2_m\n0,0,0,0,1,2\n' >gap.csv
printf '%s\n0,0,0,0,1,2,3,4,5,6,7,8\n' "$head8" | sed 's/y_m/north_m/' >no-y.csv
refuses 'a record with text in a cell' "replay: text.csv:2:13: expected a number for range_2_m, found 'oak'" \
  replay text.csv
refuses 'a record with too few cells' 'replay: few.csv:2:21: expected 12 cells, found 11' replay few.csv
refuses 'a record with a hole in the pose' "replay: hole.csv:2:3: expected a number for x_m, found ''" replay hole.csv
refuses 'a record without a row' 'replay: rowless.csv:2:1: expected at least one row' replay rowless.csv
refuses 'a record without ranges' "replay: rangeless.csv:1:1: expected a column named 'range_0_m'" replay rangeless.csv
refuses 'a record with two beams' 'replay: two.csv:1:1: expected 8, 16, 36, 90, 180 or 360 range columns, found 2' \
  replay two.csv
refuses 'a record that skips a beam' "replay: gap.csv:1:1: expected the column 'range_1_m'" replay gap.csv
refuses 'a record without y' "replay: no-y.csv:1:1: expected a column named 'y_m'" replay no-y.csv
refuses 'an empty record' 'replay: empty.csv:1:1: expected a line of column names, found nothing' replay empty.csv
refuses 'a record that is not there' 'replay: nowhere.csv: expected a file that can be read' replay nowhere.csv
refuses 'replay without a record' 'usage: replay' replay
refuses 'replay with an unknown option' 'usage: replay' replay --colour red small.csv
refuses 'replay with half a goal' "expected --goal X,Y in metres, found '1'" replay --goal 1 small.csv
refuses 'replay --every 0' "expected --every with a whole number from 1, found '0'" replay --every 0 small.csv
refuses 'replay --every 1.5' "found '1.5'" replay --every 1.5 small.csv
refuses 'replay with a negative reach' "expected a length in metres over 0, found '-6'" replay --reach -6 small.csv

# --- replay: dumps of a decision log. ---------------------------------------------------------------------------------

for policy in hard-switch two-thresholds blend composed; do
  for as in '' --as-discs; do
    kind="replay: a dump of $policy${as:+, $as}"
    run replay --policy "$policy" --every 1000 --dump-to run.dump $as "$data/spruces-run.csv"
    check "$kind: is written" prints "^The last $rows decisions are in run.dump, [0-9]+ bytes each\$"
    run replay --dump run.dump --brief
    check "$kind: exit code 0" ended_with 0
    check "$kind: is taken for what it is" prints "^run.dump: $rows decisions of the policy '$policy', from tick 0\$"
    check "$kind: falls the same" prints "^$rows of $rows decisions fall as they were logged, bit by bit\$"
  done
done
run replay --every 1000 --as-discs --dump-to run.dump "$data/spruces-run.csv"
size=$(awk '/^The last/ { print $(NF - 2) }' stdout)
check 'replay --dump-to: the file is a header of 38 bytes and the records' are_equal $((38 + rows * size)) \
  "$(($(wc -c <run.dump)))"
# gzip ends its output with the CRC-32 of what went in and its size (RFC 1952, section 2.3.1).
crc() { gzip -c | tail -c 8 | head -c 4 | od -An -tx1; }
check "replay --dump-to: the header's checksum is that of gzip" are_equal "$(head -c 34 run.dump | crc)" \
  "$(head -c 38 run.dump | tail -c 4 | od -An -tx1)"
check "replay --dump-to: the first record's checksum is that of gzip" are_equal \
  "$(head -c $((38 + size - 4)) run.dump | tail -c +39 | crc)" \
  "$(head -c $((38 + size)) run.dump | tail -c 4 | od -An -tx1)"

run replay --dump run.dump --every 100
check 'replay --dump: explains every 100th' are_equal $(((rows + 99) / 100)) "$(grep -c '^tick ' stdout)"
check 'replay --dump: says which guard' prints '^ +other: (turns|stays) (on|off), disc_before_goal -?[0-9.]+ is '
check 'replay --dump: says which weight' prints '^    weight [0-9.]+: guarded, (goes|stays) (in|out)side -> '
check 'replay --dump: says what the speed is for' prints '^  pace: [0-9.]+ m/s allowed, '

# damaged <what> <good records> <message>: cut.dump is read up to there, and then refused with the record's number.
damaged() {
  run replay --dump cut.dump --brief
  check "replay, $1: exit code 2" ended_with 2
  check "replay, $1: the good records are decided" prints "^$2 of $2 decisions fall as they were logged"
  check "replay, $1: says '$3'" says "replay: cut.dump: $3"
}
head -c $((38 + 3 * size + 10)) run.dump >cut.dump
damaged 'a dump cut short' 3 "record 4 of $rows (tick 3) is cut short: expected $size bytes, found 10"
head -c $((38 + 5 * size + 50)) run.dump >cut.dump
printf '\377\176\177' >>cut.dump
tail -c +$((38 + 5 * size + 54)) run.dump >>cut.dump
damaged 'a changed dump' 5 "record 6 of $rows (tick 5) is damaged: its checksum is not that of its bytes"
head -c 20 run.dump >cut.dump
refuses 'a dump cut short in its header' 'replay: cut.dump: the dump ends within its header' replay --dump cut.dump
refuses 'a dump of another policy' 'replay: run.dump: expected ' replay --dump run.dump --policy two-thresholds
refuses 'a table for a dump' "replay: small.csv: expected a dump of decisions, which begins with 'wendlog'" \
  replay --dump small.csv
refuses 'a dump that is not there' 'replay: nowhere.dump: expected a file that can be read' replay --dump nowhere.dump
run replay --every 1000 --dump-to run.dump "$data/spruces-run.csv"
refuses 'a dump of another ranger' 'was decided with other parameters' replay --dump run.dump --noise 0.02
refuses 'replay of a dump and a table' 'usage: replay' replay --dump run.dump small.csv
refuses 'replay --brief of a table' 'usage: replay' replay --brief small.csv
refuses 'replay --as-discs without a dump' 'usage: replay' replay --as-discs small.csv
refuses 'replay with an unknown policy' "expected --policy hard-switch, two-thresholds, blend or composed, found 'bold'" \
  replay --policy bold small.csv

[ "$failed" -eq 0 ] || echo 'examples: a check failed'
exit "$failed"
