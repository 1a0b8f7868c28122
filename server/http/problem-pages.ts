import type {ProblemCode} from '../../shared/api.ts';
import {problemCatalogue} from '../../shared/problem-catalogue.ts';

/** The page that the `type` of a problem leads to. All texts are our own, so none needs escaping. */
export function problemPage(code: ProblemCode): string {
  const {status, title, meaning, remedy} = problemCatalogue[code];
  return page(
    title,
    `<p class="sheet"><span><b>Status</b>${status}</span><span><b>Code</b>${code}</span></p>
    <h2>What happened</h2><p>${meaning}</p>
    <h2>What to do</h2><p>${remedy}</p>
    <p><a href="/problems">All problems</a></p>`,
  );
}

export function problemListPage(): string {
  const rows = (Object.keys(problemCatalogue) as ProblemCode[]).map(code => {
    const {status, title} = problemCatalogue[code];
    return `<tr><td>${status}</td><td><a href="/problems/${code}">${code}</a></td><td>${title}</td></tr>`;
  });
  return page(
    'Problems',
    `<p>Every answer that is not a success is a problem document (RFC 9457) with one of these codes.</p>
    <table><thead><tr><th>Status</th><th>Code</th><th>What happened</th></tr></thead>
    <tbody>${rows.join('\n')}</tbody></table>`,
  );
}

function page(title: string, content: string): string {
  return `<!doctype html>
<html lang="en">
  <head>
    <meta charset="utf-8">
    <meta name="viewport" content="width=device-width, initial-scale=1">
    <title>${title} · Fieldstead</title>
    <link rel="stylesheet" href="/docs/document.css">
    <link rel="icon" href="/favicon.svg" type="image/svg+xml">
  </head>
  <body>
    <header><a href="/">Fieldstead</a><a href="/docs">API reference</a></header>
    <main><h1>${title}</h1>
    ${content}
    </main>
  </body>
</html>
`;
}
