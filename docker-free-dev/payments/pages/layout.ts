import type { ServerResponse } from 'node:http';

/** Makes text safe inside HTML. */
export function escape(text: string): string {
	return text
		.replaceAll('&', '&amp;')
		.replaceAll('<', '&lt;')
		.replaceAll('>', '&gt;')
		.replaceAll('"', '&quot;');
}

const STYLE = `
:root { color-scheme: light dark; --page: #eceff1; --panel: #fbfcfc; --ink: #1d262b; --quiet: #4c5a62;
  --edge: #6b7a83; --act: #2b4653; --on-act: #ffffff; --stop: #8c1d18; }
@media (prefers-color-scheme: dark) {
  :root { --page: #151b1f; --panel: #1e262b; --ink: #e8edef; --quiet: #aab7be; --edge: #7d8c95;
    --act: #b9d3e0; --on-act: #10202a; --stop: #ffb4ab; } }
* { box-sizing: border-box; }
body { margin: 0; background: var(--page); color: var(--ink); font: 1rem/1.5 system-ui, sans-serif; }
main { max-width: 34rem; margin: 0 auto; padding: 1.5rem 1rem 3rem; }
h1 { font-size: 1.5rem; line-height: 1.2; margin: 0 0 .25rem; }
h2 { font-size: 1.05rem; margin: 1.5rem 0 .5rem; }
p { margin: .5rem 0; } .quiet { color: var(--quiet); }
.panel { background: var(--panel); border: 1px solid var(--edge); border-radius: .4rem;
  padding: 1rem; margin: 1rem 0; }
.problem { border-color: var(--stop); border-width: 2px; color: var(--stop); }
table { width: 100%; border-collapse: collapse; } td, th { padding: .3rem 0; text-align: left; }
td:last-child, th:last-child { text-align: right; } tfoot th { border-top: 1px solid var(--edge); }
label { display: block; font-weight: 600; margin: .75rem 0 .25rem; }
input { width: 100%; font: inherit; padding: .55rem .6rem; color: var(--ink); background: var(--page);
  border: 1px solid var(--edge); border-radius: .3rem; }
button { font: inherit; font-weight: 600; padding: .6rem 1rem; border-radius: .3rem; cursor: pointer;
  border: 1px solid var(--act); background: var(--act); color: var(--on-act); min-height: 2.75rem; }
button.plain { background: transparent; color: var(--ink); border-color: var(--edge); width: 100%;
  text-align: left; margin: .2rem 0; font-weight: 400; }
.actions { display: flex; flex-wrap: wrap; gap: .5rem; margin-top: 1rem; }
a { color: inherit; } :focus-visible { outline: 3px solid var(--act); outline-offset: 2px; }
code { font-size: .95em; }
`;

/** Answers with a page of the double's own plain look. `body` is HTML. */
export function sendPage(
	response: ServerResponse,
	status: number,
	title: string,
	body: string
): void {
	response.writeHead(status, {
		'content-type': 'text/html; charset=utf-8',
		'cache-control': 'no-store',
		'referrer-policy': 'no-referrer',
		'content-security-policy':
			"default-src 'none'; style-src 'unsafe-inline'; base-uri 'none'; frame-ancestors 'none'"
	});
	response.end(`<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>${escape(title)} – payment double</title>
<style>${STYLE}</style>
</head>
<body>
<main>
<p class="quiet">Payment double: no real money moves here.</p>
${body}
</main>
</body>
</html>
`);
}

/** Sends the browser on. */
export function redirect(response: ServerResponse, address: string): void {
	response.writeHead(303, { location: address, 'cache-control': 'no-store' }).end();
}
