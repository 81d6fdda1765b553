import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { escapeHtml, html } from '../../../services/mosaicker/report/html.ts';

describe('HTML templates', () => {
  it('escape every value that is not HTML already', () => {
    const name = `<img src=x onerror="alert('1')">&\``;
    expect(html`<p title="${name}">${name}</p>`.text).toBe(
      '<p title="&lt;img src=x onerror=&quot;alert(&#39;1&#39;)&quot;&gt;&amp;&#96;">&lt;img src=x onerror=&quot;alert(&#39;1&#39;)&quot;&gt;&amp;&#96;</p>',
    );
  });

  it('nest without escaping twice, and join lists', () => {
    const items = ['a&b', 'c'].map((text) => html`<li>${text}</li>`);
    expect(html`<ul>${items}</ul>`.text).toBe('<ul><li>a&amp;b</li><li>c</li></ul>');
  });

  it('write nothing for what is absent, but zero as 0', () => {
    expect(html`[${null}${undefined}${false}${0}]`.text).toBe('[0]');
  });

  it('never let a special character through, whatever the text', () => {
    fc.assert(
      fc.property(fc.string({ unit: 'binary' }), (text) => {
        const safe = escapeHtml(text);
        expect(safe).not.toMatch(/[<>"'`]/);
        expect(safe.replace(/&(amp|lt|gt|quot|#39|#96);/g, '')).not.toContain('&');
      }),
    );
  });

  it('drop control characters that HTML forbids', () => {
    expect(escapeHtml('a\u0000b\u001bc\td')).toBe('abc\td');
  });
});
