import { XMLValidator } from 'fast-xml-parser';
import { beforeAll, describe, expect, it } from 'vitest';
import { fromHex, toLinear } from '../../../services/mosaicker/colour.ts';
import type { ReportModel } from '../../../services/mosaicker/report/model.ts';
import { renderReport } from '../../../services/mosaicker/report/render.ts';
import { seamPairs } from '../../../services/mosaicker/report/sections/seams.ts';
import { REPORT_CSS } from '../../../services/mosaicker/report/style.ts';
import { fixtureModel } from './report-fixture.ts';

let model: ReportModel;
let page: string;
beforeAll(async () => {
  model = await fixtureModel();
  page = renderReport(model);
});

const plain = (text: string): string => text.replaceAll('\u202f', ' ').replaceAll('\u2212', '-').replace(/\s+/g, ' ');

describe('the report', () => {
  it('is one file: no script, no other host, nothing to fetch', () => {
    expect(page).not.toMatch(/<script|javascript:|\son\w+=/i);
    expect(page).not.toMatch(/(src|href|action|data)\s*=\s*"(https?:)?\/\//i);
    expect(page).not.toMatch(/@import|url\(/i);
    for (const [, target] of page.matchAll(/(?:src|href)="([^"]*)"/g)) {
      expect(target).toMatch(/^(#[a-z-]+$|data:image\/png;base64,)/);
    }
  });

  it('has balanced tags', () => {
    const body = page
      .slice(page.indexOf('<body>'), page.indexOf('</html>'))
      .replaceAll('<br>', '<br/>')
      .replaceAll('<details open>', '<details open="">');
    expect(XMLValidator.validate(body)).toBe(true);
  });

  it('has a place for every entry of its contents, and ids only once', () => {
    const ids = [...page.matchAll(/\sid="([^"]+)"/g)].map(([, id]) => id);
    expect(new Set(ids).size).toBe(ids.length);
    const targets = [...page.matchAll(/href="#([^"]+)"/g)].map(([, id]) => id);
    expect(targets.length).toBeGreaterThanOrEqual(12);
    for (const target of targets) expect(ids).toContain(target);
  });

  it('can be read without eyes or colours: language, headings, captions, words for pictures', () => {
    expect(page).toContain('<html lang="en">');
    expect(page.match(/<h1/g)).toHaveLength(1);
    expect(page.match(/<table>/g)?.length).toBe(page.match(/<caption>/g)?.length);
    for (const [, attributes] of page.matchAll(/<svg([^>]*)>/g)) {
      expect(attributes).toMatch(/aria-hidden="true"|role="img" aria-label="[^"]+"/);
    }
    expect(page.match(/<th(?![^>]*scope=)[ >]/g)).toBeNull();
  });

  it('shows the cautions near the top and beside the volumes', () => {
    const text = plain(page);
    const first = text.indexOf('inform; they do not decide');
    expect(first).toBeGreaterThan(0);
    expect(first).toBeLessThan(text.indexOf('id="period-maps"'));
    const volumes = text.slice(text.indexOf('id="volumes"'), text.indexOf('id="day-maps"'));
    for (const word of ['do not decide', 'curtailment', 'drought', 'water-rights', 'licensed', 'field checks']) {
      expect(volumes).toContain(word);
    }
    expect(text).toContain('No uncertainty was estimated');
    expect(plain(renderReport({ ...model, uncertainty: 'One sigma is 7 mm.' }))).toContain('One sigma is 7 mm.');
  });

  it('states volume and completeness in plain words', () => {
    const text = plain(page);
    expect(text).toContain('From 1 May 2025 to 31 August 2025, evapotranspiration took 408 million m³ of water');
    expect(text).toContain('least in August 2025, when 29 % of the basin (286 km²) had no usable data');
    expect(text).toContain('below 80 %');
    expect(text).toContain('Set aside: 1 pass, 1 job.');
  });

  it('tells a single month as a month', () => {
    const zones = model.zones.filter(({ period }) => period === '2025-06');
    const text = plain(renderReport({ ...model, zones }));
    expect(text).toContain('In June 2025, evapotranspiration took 113 million m³');
    expect(text).toContain('The other 9 % (89 km²) had no usable data.');
  });

  it('makes no volume out of nothing', () => {
    const zones = model.zones.map((row) => ({
      ...row,
      covered_area_km2: 0,
      valid_fraction: 0,
      et_mean_mm: Number.NaN,
      et_volume_m3: 0,
    }));
    expect(renderReport({ ...model, zones })).toContain('there is no volume to report');
  });

  it('shows every anchor, parameter, failure, source and version', () => {
    for (const { key, value } of model.parameters) {
      expect(page).toContain(key);
      expect(page).toContain(value);
    }
    for (const failure of model.failures) expect(page).toContain(failure.message);
    for (const { error } of model.leftOut) expect(page).toContain(error.code);
    for (const { name } of model.sources) expect(page).toContain(name);
    for (const { name, version } of model.versions) expect(page).toContain(`${name} ${version}`);
    for (const { anchors } of model.passes) for (const { reason } of anchors) expect(page).toContain(reason);
    expect(page).toContain('borrowed</strong> from 2025-05-18-landsat9-p033');
  });

  it('counts the seams beyond their limit', () => {
    expect(seamPairs(model.seams)).toHaveLength(6);
    expect(plain(page)).toContain('1 seam is beyond the limit</span> of 6 measured');
    const good = model.seams.filter(({ kind }) => kind !== 'pass-overlap');
    expect(plain(renderReport({ ...model, seams: good }))).toContain('All 5 seams are within their limits.');
  });

  it('gives the same text for the same model', async () => {
    expect(renderReport(await fixtureModel())).toBe(page);
  });

  it('stays whole when a section has nothing to show', () => {
    const empty: ReportModel = {
      ...model,
      zones: [],
      periodMaps: [],
      dayMaps: [],
      days: [],
      periods: [],
      passes: [],
      adjustment: null,
      seams: [],
      bounds: [],
      fluxOrders: [],
      closures: [],
      leftOut: [],
      failures: [],
      parameters: [],
      sources: [],
      versions: [],
      status: 'complete',
    };
    const text = renderReport(empty);
    expect(text).not.toMatch(/NaN|Infinity|undefined|null/);
    expect(text).toContain('Nothing was left out');
    expect(text).toContain('no seam to measure');
  });

  it('never shows NaN, Infinity, undefined or null', () => {
    const text = page.replace(/base64,[^"]*/g, '');
    expect(text).not.toMatch(/NaN|Infinity|undefined|null/);
  });
});

describe('hostile names', () => {
  const evil = `"><script>alert(1)</script><img src=x onerror='alert(2)'>&\u0000`;

  it('stay text', async () => {
    const hostile = await fixtureModel({ basin: evil, zone: evil });
    const text = renderReport({
      ...hostile,
      runId: evil,
      uncertainty: evil,
      grid: { ...hostile.grid, crs: evil },
      parameters: [{ key: evil, value: evil, isDefault: false }],
      sources: [{ kind: 'scene', name: evil, detail: evil, fingerprint: evil }],
      versions: [{ name: evil, version: evil }],
      failures: hostile.failures.map((failure) => ({ ...failure, job: evil, message: evil, remedy: evil })),
      days: hostile.days.map((row) => ({ ...row, passes: [evil] })),
      seams: hostile.seams.map((row) => ({ ...row, seam: evil, when: evil })),
      passes: hostile.passes.map((pass) => ({
        ...pass,
        passId: evil,
        satellite: evil,
        scenes: [evil],
        setAside: evil,
      })),
      closures: hostile.closures.map((check) => ({ ...check, name: evil, meaning: evil, unit: evil })),
    });
    expect(text).not.toMatch(/<script|<img/i);
    expect(text).not.toContain('\u0000');
    // What the names hold stays inside quoted attributes.
    for (const [tag] of text.replace(/base64,[^"]*/g, '').matchAll(/<[a-z][^>]*>/gi)) {
      expect(tag.replace(/"[^"]*"/g, '')).not.toMatch(/onerror|alert/);
    }
    expect(text).toContain('&lt;script&gt;alert(1)&lt;/script&gt;');
  });
});

describe('the style', () => {
  it('has contrast of at least 4.5 to 1 for all text (WCAG 2.2, criterion 1.4.3)', () => {
    const colour = (name: string): string => {
      const found = new RegExp(`--${name}: (#[0-9a-f]{6})`).exec(REPORT_CSS);
      if (!found) throw new Error(`no colour ${name}`);
      return found[1];
    };
    const luminance = (hex: string): number => {
      const [r, g, b] = fromHex(hex).map(toLinear);
      return 0.2126 * r + 0.7152 * g + 0.0722 * b;
    };
    const contrast = (a: string, b: string): number => {
      const [dark, light] = [luminance(a), luminance(b)].sort((x, y) => x - y);
      return (light + 0.05) / (dark + 0.05);
    };
    for (const ink of ['ink', 'soft', 'water', 'good', 'bad']) {
      expect(contrast(colour(ink), colour('paper'))).toBeGreaterThan(4.5);
      expect(contrast(colour(ink), colour('card'))).toBeGreaterThan(4.5);
    }
    expect(contrast(colour('warn-ink'), colour('warn-ground'))).toBeGreaterThan(4.5);
  });
});
