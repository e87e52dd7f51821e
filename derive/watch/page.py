"""The pages that a watcher serves: the sheet as it is, or the message of what is wrong, each listening for the next."""

from __future__ import annotations

import re
from html import escape

# It asks the server it came from and no other; the number tells whether this page is still the newest.
_LISTENER = """<script>
(function () {{
  const shown = {number};
  const said = document.createElement("div");
  said.setAttribute("role", "status");
  said.style.cssText = "position:fixed;right:1rem;bottom:1rem;padding:.4rem .8rem;font:14px sans-serif;" +
    "background:#17508a;color:#fff;border-radius:4px;display:none";
  document.body.append(said);
  const say = (words) => {{ said.textContent = words; said.style.display = words ? "block" : "none"; }};
  const events = new EventSource("/changes");
  events.onmessage = (event) => {{
    const now = JSON.parse(event.data);
    if (now.number !== shown) {{ location.reload(); return; }}
    say(now.working ? "deriving again…" : "");
  }};
  events.onerror = () => say("nodeledger watch has ended");
}})();
</script>
"""
_MESSAGE = """<!DOCTYPE html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta name="color-scheme" content="light dark">
<title>{title}</title>
<style>
body {{ font: 17px/1.5 Georgia, serif; max-width: 50rem; margin: 3rem auto; padding: 0 1rem; }}
pre {{ white-space: pre-wrap; border-left: 4px solid #a3122a; padding-left: 1rem; font-size: 15px; }}
</style>
</head>
<body>
<h1>{title}</h1>
{body}
<p>The page follows as soon as the file is saved again.</p>
</body>
</html>
"""
# A sheet lets itself run no script but its own and ask for nothing; the page that is served does both.
_POLICY = re.compile(rb'<meta http-equiv="Content-Security-Policy"[^>]*>\n?')


def listening(page: bytes, number: int) -> bytes:
    """Give a page that asks to be loaded again when there is a newer one."""
    script = _LISTENER.format(number=number).encode("utf-8")
    before, mark, after = _POLICY.sub(b"", page, count=1).rpartition(b"</body>")
    return before + script + mark + after if mark else page + script


def message_page(file: str, message: str) -> bytes:
    """Give the page of what is wrong with a file, in its own words."""
    body = f'<pre role="alert">{escape(message)}</pre>'
    return _MESSAGE.format(title=escape(f"{file} cannot be derived"), body=body).encode("utf-8")


def waiting_page(file: str) -> bytes:
    """Give the page that stands until the first result is there."""
    return _MESSAGE.format(title=escape(f"{file} is being derived"), body="").encode("utf-8")
