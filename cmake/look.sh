#!/bin/sh
# cmake/look.sh PAGE [SHOTS] - opens a review page in headless Chromium, in frames 390 and 1280 pixels wide; tries every
# policy, run and button, and the slider; and says what went wrong: a script error, a page that scrolls sideways, a
# machine that does not move. Exit code 1 when something did. With SHOTS, a folder, it leaves pictures there, light and
# dark.
set -eu
if [ $# -lt 1 ] || [ ! -f "$1" ]; then
  echo "usage: look.sh PAGE [SHOTS]" >&2
  exit 2
fi
browser=$(command -v chromium || command -v chromium-browser || command -v google-chrome) || {
  echo "skipped: no Chromium on this machine"
  exit 0
}
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
trap 'exit 2' HUP INT TERM

# The page with a listener before everything else, and a visitor behind it.
cat >"$work/before" <<'HTML'
<script>
window.seen = [];
addEventListener("error", (event) => window.seen.push(event.message));
</script>
HTML
cat >"$work/after" <<'HTML'
<script>
setTimeout(() => {
  const told = { errors: window.seen, width: innerWidth, still: 0, runs: 0, wide: [] };
  const root = document.documentElement;
  const widest = () => {
    told.scroll = Math.max(told.scroll || 0, root.scrollWidth - root.clientWidth, document.body.scrollWidth - innerWidth);
  };
  try {
    for (const radio of document.querySelectorAll("input[name=policy]")) {
      radio.click();
      const section = [...document.querySelectorAll("section.policy")].find((s) => !s.hidden);
      const pick = section.querySelector("select");
      const slider = section.querySelector("input[type=range]");
      const robot = section.querySelector(".robot");
      for (let i = 0; i < pick.options.length; ++i) {
        pick.selectedIndex = i;
        pick.dispatchEvent(new Event("change"));
        const from = robot.getAttribute("transform");
        slider.value = Math.floor(slider.max / 2);
        slider.dispatchEvent(new Event("input"));
        told.still += from === robot.getAttribute("transform") || !section.querySelector("output").textContent ? 1 : 0;
        told.runs += 1;
        widest();
      }
    }
    for (const button of document.querySelectorAll("button.show")) button.click();
    document.querySelector("section.policy:not([hidden]) button.play").click();
    widest();
    if (told.scroll > 0) {
      told.wide = [...document.querySelectorAll("body *")]
        .filter((e) => e.getBoundingClientRect().right > root.clientWidth + 1)
        .slice(0, 5).map((e) => `${e.tagName}.${e.getAttribute("class")}`);
    }
  } catch (error) {
    told.errors.push(String(error));
  }
  parent.postMessage(JSON.stringify(told), "*");
}, 300);
</script>
HTML
{
  sed '/<head>/q' "$1"
  cat "$work/before"
  sed '1,/<head>/d' "$1"
  cat "$work/after"
} >"$work/page.html"

failed=0
for width in 390 1280; do
  cat >"$work/frame.html" <<HTML
<!doctype html><body style="margin:0"><iframe src="page.html" style="border:0;width:${width}px;height:1200px"></iframe>
<pre id="told">nothing</pre><script>addEventListener("message", (m) => { told.textContent = m.data; });</script>
HTML
  told=$("$browser" --headless --no-sandbox --disable-gpu --virtual-time-budget=8000 --window-size=1400,1300 \
    --dump-dom "file://$work/frame.html" 2>/dev/null | sed -n 's/.*<pre id="told">\(.*\)<\/pre>.*/\1/p')
  case $told in
    *'"errors":[]'*'"still":0'*'"runs":0'*) good=no ;;  # no run at all
    *'"errors":[]'*'"still":0'*'"scroll":0'*) good=yes ;;
    *) good=no ;;
  esac
  if [ $good = yes ]; then
    echo "ok: $width px: no script error, no sideways scroll, the machine moves along every run"
  else
    echo "FAILED: $width px: $told"
    failed=1
  fi
done

if [ $# -ge 2 ]; then
  mkdir -p "$2"
  page=$(cd "$(dirname "$1")" && pwd)/$(basename "$1")
  for width in 390 1280; do
    height=$((width == 390 ? 9000 : 4200))
    printf '<!doctype html><body style="margin:0"><iframe src="file://%s" style="border:0;width:%spx;height:%spx">' \
      "$page" $width $height >"$work/shot.html"
    "$browser" --headless --no-sandbox --disable-gpu --hide-scrollbars --virtual-time-budget=4000 \
      --window-size=$((width < 500 ? 500 : width)),$height --screenshot="$2/$width-light.png" \
      "file://$work/shot.html" 2>/dev/null
    "$browser" --headless --no-sandbox --disable-gpu --hide-scrollbars --virtual-time-budget=4000 \
      --blink-settings=preferredColorScheme=0 --window-size=$((width < 500 ? 500 : width)),$height \
      --screenshot="$2/$width-dark.png" "file://$work/shot.html" 2>/dev/null
  done
fi
exit $failed
