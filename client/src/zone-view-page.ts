import { Uri, type Webview } from 'vscode'
import { embedded, type ToView } from '../messages.ts'

/**
 * The page of the zone view. Nothing in it comes from a file but the messages that it begins with: data, that the page
 * validates as it does those that come later.
 */
export function viewPage(webview: Webview, extensionUri: Uri, headStart: readonly ToView[]): string {
  const address = (name: string) => String(webview.asWebviewUri(Uri.joinPath(extensionUri, 'dist', name)))
  const nonce = newNonce()
  const policy = [
    "default-src 'none'",
    `script-src 'nonce-${nonce}'`,
    `style-src ${webview.cspSource}`,
    `img-src ${webview.cspSource}`,
  ].join('; ')
  return `<!DOCTYPE html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta http-equiv="Content-Security-Policy" content="${policy}">
<meta name="viewport" content="width=device-width, initial-scale=1">
<link rel="stylesheet" href="${address('view-style.css')}">
<title>Zone view</title>
</head>
<body>
<div class="switches" role="toolbar" aria-label="What is shown">
<button type="button" data-name="path" data-value="on" title="The path through the zone">Path</button>
<button type="button" data-name="points" data-value="off" title="All points of the label book">All points</button>
<button type="button" data-name="wedge" data-value="off" title="The irreducible wedge">Wedge</button>
<button type="button" data-name="mesh" data-value="off" title="Irreducible mesh points, the larger the more they weigh">Mesh</button>
<select data-name="which" data-value="0" aria-label="Which mesh" title="Which mesh of the file" hidden><option value="0"></option></select>
<button type="button" data-name="bands" data-value="on" title="Empty-lattice bands along the path">Bands</button>
<button type="button" data-name="perspective" data-value="off" title="Perspective instead of parallel projection">Perspective</button>
<select data-name="around" data-value="none" aria-label="Around the first zone" title="What stands around the first zone">
<option value="none">First zone</option>
<option value="shell-1">+ neighbours</option>
<option value="shell-2">+ two shells</option>
<option value="lattice">+ lattice points</option>
<option value="zone-2">Second zone</option>
<option value="zone-3">Third zone</option>
<option value="zone-4">Fourth zone</option>
</select>
<select data-name="look" data-act aria-label="Look" title="Turn the view">
<option value="">Look…</option>
<option value="start">as at first</option>
<option value="a*">along a*</option>
<option value="b*">along b*</option>
<option value="c*">along c*</option>
<option value="facet">onto the facet</option>
<option value="x">along x</option>
<option value="z">along z</option>
</select>
<select data-name="save" data-act aria-label="Save" title="Save what is shown">
<option value="">Save…</option>
<option value="zone">zone figure (SVG)</option>
<option value="bands">band figure (SVG)</option>
<option value="png-2">picture, 2×</option>
<option value="png-4">picture, 4×</option>
</select>
<span class="gap"></span>
<button type="button" data-name="write" data-value="off" title="Points that are picked one after the other are written into the path">Write path</button>
</div>
<div id="stage" tabindex="0" role="application" aria-label="First Brillouin zone. Arrows turn it, with Shift they move it, plus and minus zoom, 0 turns it back." aria-describedby="words">
<canvas id="glass" aria-hidden="true"></canvas>
<canvas id="paper" aria-hidden="true"></canvas>
<div id="names" role="group" aria-label="Points"></div>
<div id="card" role="tooltip" hidden></div>
<div id="reason" role="status"></div>
<div id="foot"><span id="hint" role="status"></span><button type="button" id="break" hidden title="The next point begins a new piece of the path ( | )">New piece</button></div>
<p id="words" class="aside"></p>
</div>
<div id="strip" tabindex="0" role="group" aria-label="Empty-lattice bands. Left and right arrow move the marker along the path."></div>
<script type="application/json" id="head-start">${embedded(headStart)}</script>
<script type="module" nonce="${nonce}" src="${address('view.js')}"></script>
</body>
</html>`
}

function newNonce(): string {
  const bytes = crypto.getRandomValues(new Uint8Array(16))
  return Array.from(bytes, byte => byte.toString(16).padStart(2, '0')).join('')
}
